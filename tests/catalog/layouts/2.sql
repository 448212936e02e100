PRAGMA application_id = 1299476326;
PRAGMA user_version = 2;
BEGIN TRANSACTION;
CREATE TABLE "applied_corrections" (
   "motor" INTEGER,
   "quantity" TEXT,
   "correction" INTEGER REFERENCES "corrections"("id"),
   "published_value" REAL,
   "published_low" REAL,
   "published_high" REAL,
   PRIMARY KEY ("motor", "quantity")
) STRICT;
CREATE TABLE "column_cache" (
   "source" INTEGER,
   "name" TEXT,
   "data" BLOB,
   PRIMARY KEY ("source", "name")
) STRICT;
CREATE TABLE "constants" (
   "id" INTEGER PRIMARY KEY,
   "torque_constant" REAL,
   "torque_constant_low" REAL,
   "torque_constant_high" REAL,
   "torque_constant_by" INTEGER,
   "armature_resistance" REAL,
   "armature_resistance_low" REAL,
   "armature_resistance_high" REAL,
   "armature_resistance_by" INTEGER,
   "armature_inductance" REAL,
   "armature_inductance_low" REAL,
   "armature_inductance_high" REAL,
   "armature_inductance_by" INTEGER,
   "rotor_inertia" REAL,
   "rotor_inertia_low" REAL,
   "rotor_inertia_high" REAL,
   "rotor_inertia_by" INTEGER,
   "no_load_current" REAL,
   "no_load_current_low" REAL,
   "no_load_current_high" REAL,
   "no_load_current_by" INTEGER,
   "viscous_damping" REAL,
   "viscous_damping_low" REAL,
   "viscous_damping_high" REAL,
   "viscous_damping_by" INTEGER,
   "motor_constant" REAL,
   "motor_constant_low" REAL,
   "motor_constant_high" REAL,
   "motor_constant_by" INTEGER
) STRICT;
INSERT INTO "constants" VALUES(1,2.50026044060137411784e-02,2.48123955608917680371e-02,2.51942713693038659872e-02,1,7.99998357796527059804e-01,7.87461730648780888763e-01,8.12734571811957628995e-01,2,1.20000130657144056176e-04,1.17312304959603093228e-04,1.22749539041879261519e-04,3,4.02000053728924416299e-06,3.93188257576051064679e-06,4.11009332258098832859e-06,4,6.0007460979739607465e-02,5.37032076006504072163e-02,6.70517746353638671719e-02,6,NULL,NULL,NULL,NULL,2.7953790224338085496e-02,2.76484757440715045451e-02,2.82624762080728245128e-02,8);
INSERT INTO "constants" VALUES(2,4.99989560524314591294e-02,4.96166846144187254075e-02,5.0384172698360769893e-02,1,3.19999874452915067379e+00,3.15014195238224070649e+00,3.25064461214019972956e+00,2,4.7999997312976757334e-04,4.69485219207465935553e-04,4.90750219130463532883e-04,3,4.02000053728924416299e-06,3.93188257576051064679e-06,4.11009332258098832859e-06,4,3.10013525630733338678e-02,2.77115935733759227721e-02,3.46816525796387470359e-02,7,NULL,NULL,NULL,NULL,2.79502716172457428556e-02,2.76451715113056918637e-02,2.82587388961695676337e-02,8);
INSERT INTO "constants" VALUES(3,7.50789226236957679683e-02,7.44948322496753745358e-02,7.5667592665254454487e-02,1,7.20001160129730255476e+00,7.08794477628902441779e+00,7.31385030428485727327e+00,2,1.07999920322540687855e-03,1.05567753774108482461e-03,1.10488121350326980001e-03,3,4.02000053728924416299e-06,3.93188257576051064679e-06,4.11009332258098832859e-06,4,1.99989614879737612196e-02,0.0178368582859071,2.24231450509120681935e-02,5,NULL,NULL,NULL,NULL,2.79802399018557329535e-02,2.76723461899131030483e-02,2.82915593637222510803e-02,8);
CREATE TABLE "conventions" (
   "id" INTEGER PRIMARY KEY,
   "current" TEXT,
   "voltage" TEXT,
   "between" TEXT,
   "connection" TEXT,
   "temperature" REAL,
   "shape" TEXT,
   "basis" TEXT
) STRICT;
INSERT INTO "conventions" VALUES(1,NULL,'dc',NULL,NULL,NULL,NULL,'assumed');
INSERT INTO "conventions" VALUES(2,'dc',NULL,NULL,NULL,NULL,NULL,'assumed');
INSERT INTO "conventions" VALUES(3,NULL,NULL,NULL,NULL,NULL,NULL,'assumed');
CREATE TABLE "corrections" (
   "id" INTEGER PRIMARY KEY,
   "maker" TEXT NOT NULL,
   "part_number" TEXT NOT NULL,
   "quantity" TEXT NOT NULL,
   "text" TEXT NOT NULL,
   "value" REAL NOT NULL,
   "low" REAL,
   "high" REAL,
   "reason" TEXT NOT NULL,
   "at" TEXT NOT NULL,
   "published_text" TEXT,
   "revoked_at" TEXT
) STRICT;
CREATE TABLE "derivations" (
   "id" INTEGER PRIMARY KEY,
   "basis" TEXT,
   "figures" TEXT
) STRICT;
INSERT INTO "derivations" VALUES(1,'reconciled','torque_constant speed_constant nominal_voltage no_load_speed');
INSERT INTO "derivations" VALUES(2,'reconciled','terminal_resistance nominal_voltage stall_current');
INSERT INTO "derivations" VALUES(3,'published','terminal_inductance');
INSERT INTO "derivations" VALUES(4,'published','rotor_inertia');
INSERT INTO "derivations" VALUES(5,'reconciled','torque_constant nominal_voltage no_load_current no_load_speed');
INSERT INTO "derivations" VALUES(6,'reconciled','speed_constant nominal_voltage no_load_current no_load_speed');
INSERT INTO "derivations" VALUES(7,'reconciled','torque_constant speed_constant nominal_voltage no_load_current no_load_speed');
INSERT INTO "derivations" VALUES(8,'derived','torque_constant speed_constant terminal_resistance nominal_voltage no_load_speed stall_current');
CREATE TABLE "figure_digit" (
   "id" INTEGER PRIMARY KEY,
   "nominal_voltage" INTEGER,
   "mains_voltage" INTEGER,
   "no_load_speed" INTEGER,
   "no_load_current" INTEGER,
   "nominal_speed" INTEGER,
   "nominal_torque" INTEGER,
   "nominal_current" INTEGER,
   "stall_torque" INTEGER,
   "stall_current" INTEGER,
   "continuous_stall_torque" INTEGER,
   "continuous_stall_current" INTEGER,
   "peak_torque" INTEGER,
   "peak_current" INTEGER,
   "rated_power" INTEGER,
   "maximum_power" INTEGER,
   "maximum_efficiency" INTEGER,
   "rated_efficiency" INTEGER,
   "terminal_resistance" INTEGER,
   "terminal_inductance" INTEGER,
   "torque_constant" INTEGER,
   "back_emf_constant" INTEGER,
   "speed_constant" INTEGER,
   "speed_torque_gradient" INTEGER,
   "motor_constant" INTEGER,
   "mechanical_time_constant" INTEGER,
   "electrical_time_constant" INTEGER,
   "rotor_inertia" INTEGER,
   "friction_torque" INTEGER,
   "viscous_damping" INTEGER,
   "cogging_torque" INTEGER,
   "thermal_resistance_winding_housing" INTEGER,
   "thermal_resistance_housing_ambient" INTEGER,
   "thermal_resistance" INTEGER,
   "thermal_time_constant_winding" INTEGER,
   "thermal_time_constant_housing" INTEGER,
   "ambient_temperature" INTEGER,
   "maximum_winding_temperature" INTEGER,
   "rated_temperature_rise" INTEGER,
   "maximum_speed" INTEGER,
   "pole_pairs" INTEGER,
   "poles" INTEGER,
   "phases" INTEGER,
   "mass" INTEGER,
   "diameter" INTEGER,
   "length" INTEGER,
   "shaft_diameter" INTEGER,
   "axial_load" INTEGER,
   "radial_load" INTEGER,
   "price" INTEGER
) STRICT;
INSERT INTO "figure_digit" VALUES(1,NULL,NULL,0,0,NULL,NULL,NULL,NULL,-1,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,-3,-3,-1,NULL,0,NULL,NULL,NULL,NULL,-1,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,0,NULL,NULL,NULL,NULL,NULL,NULL);
INSERT INTO "figure_digit" VALUES(2,NULL,NULL,0,0,NULL,NULL,NULL,NULL,-2,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,-2,-3,-1,NULL,0,NULL,NULL,NULL,NULL,-1,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,0,NULL,NULL,NULL,NULL,NULL,NULL);
INSERT INTO "figure_digit" VALUES(3,NULL,NULL,0,0,NULL,NULL,NULL,NULL,-2,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,-2,-2,-1,NULL,0,NULL,NULL,NULL,NULL,-1,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,0,NULL,NULL,NULL,NULL,NULL,NULL);
CREATE TABLE "figure_intervals" (
   "motor" INTEGER,
   "quantity" TEXT,
   "low" REAL,
   "high" REAL,
   PRIMARY KEY ("motor", "quantity")
) STRICT;
CREATE TABLE "figure_places" (
   "motor" INTEGER,
   "quantity" TEXT,
   "row" INTEGER,
   "column" INTEGER,
   PRIMARY KEY ("motor", "quantity")
) STRICT;
CREATE TABLE "figure_qualifiers" (
   "motor" INTEGER,
   "quantity" TEXT,
   "qualifier" TEXT,
   PRIMARY KEY ("motor", "quantity")
) STRICT;
CREATE TABLE "figure_text" (
   "id" INTEGER PRIMARY KEY,
   "nominal_voltage" TEXT,
   "mains_voltage" TEXT,
   "no_load_speed" TEXT,
   "no_load_current" TEXT,
   "nominal_speed" TEXT,
   "nominal_torque" TEXT,
   "nominal_current" TEXT,
   "stall_torque" TEXT,
   "stall_current" TEXT,
   "continuous_stall_torque" TEXT,
   "continuous_stall_current" TEXT,
   "peak_torque" TEXT,
   "peak_current" TEXT,
   "rated_power" TEXT,
   "maximum_power" TEXT,
   "maximum_efficiency" TEXT,
   "rated_efficiency" TEXT,
   "terminal_resistance" TEXT,
   "terminal_inductance" TEXT,
   "torque_constant" TEXT,
   "back_emf_constant" TEXT,
   "speed_constant" TEXT,
   "speed_torque_gradient" TEXT,
   "motor_constant" TEXT,
   "mechanical_time_constant" TEXT,
   "electrical_time_constant" TEXT,
   "rotor_inertia" TEXT,
   "friction_torque" TEXT,
   "viscous_damping" TEXT,
   "cogging_torque" TEXT,
   "thermal_resistance_winding_housing" TEXT,
   "thermal_resistance_housing_ambient" TEXT,
   "thermal_resistance" TEXT,
   "thermal_time_constant_winding" TEXT,
   "thermal_time_constant_housing" TEXT,
   "ambient_temperature" TEXT,
   "maximum_winding_temperature" TEXT,
   "rated_temperature_rise" TEXT,
   "maximum_speed" TEXT,
   "pole_pairs" TEXT,
   "poles" TEXT,
   "phases" TEXT,
   "mass" TEXT,
   "diameter" TEXT,
   "length" TEXT,
   "shaft_diameter" TEXT,
   "axial_load" TEXT,
   "radial_load" TEXT,
   "price" TEXT,
   "description" TEXT,
   "connection" TEXT,
   "magnet" TEXT,
   "commutation" TEXT,
   "protection" TEXT
) STRICT;
INSERT INTO "figure_text" VALUES(1,'12',NULL,'4557','60',NULL,NULL,NULL,NULL,'15.0',NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,'0.800','0.120','25.0',NULL,'382',NULL,NULL,NULL,NULL,'40.2',NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,'210',NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL);
INSERT INTO "figure_text" VALUES(2,'24',NULL,'4564','31',NULL,NULL,NULL,NULL,'7.50',NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,'3.20','0.480','50.0',NULL,'191',NULL,NULL,NULL,NULL,'40.2',NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,'210',NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL);
INSERT INTO "figure_text" VALUES(3,'36',NULL,'4567','20',NULL,NULL,NULL,NULL,'5.00',NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,'7.20','1.08','75.0',NULL,'127',NULL,NULL,NULL,NULL,'40.2',NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,'210',NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL);
CREATE TABLE "figure_value" (
   "id" INTEGER PRIMARY KEY,
   "nominal_voltage" REAL,
   "mains_voltage" REAL,
   "no_load_speed" REAL,
   "no_load_current" REAL,
   "nominal_speed" REAL,
   "nominal_torque" REAL,
   "nominal_current" REAL,
   "stall_torque" REAL,
   "stall_current" REAL,
   "continuous_stall_torque" REAL,
   "continuous_stall_current" REAL,
   "peak_torque" REAL,
   "peak_current" REAL,
   "rated_power" REAL,
   "maximum_power" REAL,
   "maximum_efficiency" REAL,
   "rated_efficiency" REAL,
   "terminal_resistance" REAL,
   "terminal_inductance" REAL,
   "torque_constant" REAL,
   "back_emf_constant" REAL,
   "speed_constant" REAL,
   "speed_torque_gradient" REAL,
   "motor_constant" REAL,
   "mechanical_time_constant" REAL,
   "electrical_time_constant" REAL,
   "rotor_inertia" REAL,
   "friction_torque" REAL,
   "viscous_damping" REAL,
   "cogging_torque" REAL,
   "thermal_resistance_winding_housing" REAL,
   "thermal_resistance_housing_ambient" REAL,
   "thermal_resistance" REAL,
   "thermal_time_constant_winding" REAL,
   "thermal_time_constant_housing" REAL,
   "ambient_temperature" REAL,
   "maximum_winding_temperature" REAL,
   "rated_temperature_rise" REAL,
   "maximum_speed" REAL,
   "pole_pairs" REAL,
   "poles" REAL,
   "phases" REAL,
   "mass" REAL,
   "diameter" REAL,
   "length" REAL,
   "shaft_diameter" REAL,
   "axial_load" REAL,
   "radial_load" REAL,
   "price" REAL
) STRICT;
INSERT INTO "figure_value" VALUES(1,12.0,NULL,4.77207924080289558332e+02,0.06,NULL,NULL,NULL,NULL,15.0,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,0.8,0.00012,0.025,NULL,4.00029464557100311594e+01,NULL,NULL,NULL,NULL,4.02000000000000047442e-06,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,0.21,NULL,NULL,NULL,NULL,NULL,NULL);
INSERT INTO "figure_value" VALUES(2,24.0,NULL,4.77940962366127166651e+02,0.031,NULL,NULL,NULL,NULL,7.5,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,3.2,0.00048,0.05,NULL,2.00014732278550155797e+01,NULL,NULL,NULL,NULL,4.02000000000000047442e-06,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,0.21,NULL,NULL,NULL,NULL,NULL,NULL);
INSERT INTO "figure_value" VALUES(3,36.0,NULL,4.78255121631486133535e+02,0.02,NULL,NULL,NULL,NULL,5.0,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,7.2,0.00108,0.075,NULL,1.32994089001967896734e+01,NULL,NULL,NULL,NULL,4.02000000000000047442e-06,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,NULL,0.21,NULL,NULL,NULL,NULL,NULL,NULL);
CREATE TABLE "files" (
   "id" INTEGER PRIMARY KEY,
   "import" INTEGER NOT NULL REFERENCES "imports"("id"),
   "file" TEXT NOT NULL,
   "sha256" TEXT NOT NULL,
   "format" TEXT,
   "layout" TEXT,
   "options" TEXT NOT NULL,
   "remarks" TEXT
) STRICT;
INSERT INTO "files" VALUES(1,1,'puffin.csv','f88e75941992fd81f43e085760939f0d88b3941dc767739818e72d7f2f84a84a','csv','rows','["Puffinworks", null, null, null, "52ee500f00ce9503d2774469f7d82fe2d96bb1d553478487e87f61b694cb3593"]',NULL);
CREATE TABLE "finding_motors" (
   "finding" INTEGER,
   "first" INTEGER,
   "last" INTEGER,
   PRIMARY KEY ("finding", "first")
) STRICT;
CREATE TABLE "findings" (
   "id" INTEGER PRIMARY KEY,
   "source" INTEGER NOT NULL,
   "motor" INTEGER NOT NULL,
   "scope" TEXT NOT NULL,
   "severity" TEXT NOT NULL,
   "relation" TEXT,
   "figures" TEXT,
   "suspect" TEXT,
   "ratio" REAL,
   "cause" TEXT,
   "other_causes" TEXT,
   "implied" REAL,
   "unit" TEXT,
   "row" INTEGER,
   "column" INTEGER,
   "message" TEXT NOT NULL
) STRICT;
CREATE TABLE "further_figures" (
   "id" INTEGER PRIMARY KEY,
   "motor" INTEGER NOT NULL,
   "condition" TEXT,
   "quantity" TEXT NOT NULL,
   "heading" INTEGER,
   "convention" INTEGER,
   "text" TEXT,
   "value" REAL,
   "low" REAL,
   "high" REAL,
   "unit" TEXT,
   "qualifier" TEXT,
   "row" INTEGER,
   "column" INTEGER
) STRICT;
CREATE TABLE "gears" (
   "part_number" TEXT NOT NULL,
   "maker" TEXT NOT NULL,
   "series" TEXT,
   "currency" TEXT,
   "stages" INTEGER,
   "ratio" REAL NOT NULL,
   "efficiency" REAL,
   "inertia" REAL,
   "mass" REAL,
   "continuous_torque" REAL,
   "peak_torque" REAL,
   "maximum_input_speed" REAL,
   "backlash" REAL,
   "diameter" REAL,
   "length" REAL,
   "price" REAL,
   PRIMARY KEY ("maker", "part_number")
) STRICT;
CREATE TABLE "headings" (
   "id" INTEGER PRIMARY KEY,
   "source" INTEGER NOT NULL REFERENCES "sources"("id"),
   "text" TEXT NOT NULL,
   "quantity" TEXT,
   "unit" TEXT,
   "convention" INTEGER REFERENCES "conventions"("id"),
   "score" REAL,
   "reason" TEXT,
   "factor" REAL,
   "offset" REAL
) STRICT;
INSERT INTO "headings" VALUES(1,1,'Part number','part_number','',NULL,1.0,'the part numbers',1.0,0.0);
INSERT INTO "headings" VALUES(2,1,'Nominal voltage [V]','nominal_voltage','V',1,1.0,'"Nominal voltage" is a name of it, V fits',1.0,0.0);
INSERT INTO "headings" VALUES(3,1,'No-load speed [rpm]','no_load_speed','rpm',NULL,1.0,'"No-load speed" is a name of it, rad/s fits',1.04719755119659765907e-01,0.0);
INSERT INTO "headings" VALUES(4,1,'No-load current [mA]','no_load_current','mA',2,1.0,'"No-load current" is a name of it, A fits',0.001,0.0);
INSERT INTO "headings" VALUES(5,1,'Torque constant [mNm/A]','torque_constant','mNm/A',2,1.0,'"Torque constant" is a name of it, N·m/A fits',0.001,0.0);
INSERT INTO "headings" VALUES(6,1,'Speed constant [rpm/V]','speed_constant','rpm/V',1,1.0,'"Speed constant" is a name of it, rad/(s·V) fits',1.04719755119659765907e-01,0.0);
INSERT INTO "headings" VALUES(7,1,'Terminal resistance [Ohm]','terminal_resistance','Ohm',3,1.0,'"Terminal resistance" is a name of it, Ω fits',1.0,0.0);
INSERT INTO "headings" VALUES(8,1,'Terminal inductance [mH]','terminal_inductance','mH',3,1.0,'"Terminal inductance" is a name of it, H fits',0.001,0.0);
INSERT INTO "headings" VALUES(9,1,'Stall current [A]','stall_current','A',2,1.0,'"Stall current" is a name of it, A fits',1.0,0.0);
INSERT INTO "headings" VALUES(10,1,'Rotor inertia [gcm²]','rotor_inertia','gcm^2',NULL,1.0,'"Rotor inertia" is a name of it, kg·m² fits',1.0e-07,0.0);
INSERT INTO "headings" VALUES(11,1,'Mass [g]','mass','g',NULL,1.0,'"Mass" is a name of it, kg fits',0.001,0.0);
CREATE TABLE "imports" (
   "id" INTEGER PRIMARY KEY,
   "at" TEXT,
   "files" INTEGER,
   "motors" INTEGER
) STRICT;
INSERT INTO "imports" VALUES(1,'2026-12-01T10:23:28Z',1,3);
CREATE TABLE "kept_readings" (
   "maker" TEXT,
   "heading" TEXT,
   "reading" TEXT,
   "at" TEXT,
   PRIMARY KEY ("maker", "heading")
) STRICT;
CREATE TABLE "kinds" (
   "id" INTEGER PRIMARY KEY,
   "commutation" TEXT,
   "commutation_basis" TEXT,
   "magnet" TEXT,
   "magnet_basis" TEXT,
   "reference_temperature" REAL,
   "reference_temperature_basis" TEXT
) STRICT;
INSERT INTO "kinds" VALUES(1,'brushed','assumed','unknown','assumed',25.0,'assumed');
CREATE TABLE "motor" (
   "id" INTEGER PRIMARY KEY,
   "maker" TEXT NOT NULL,
   "part_number" TEXT NOT NULL,
   "series" TEXT,
   "source" INTEGER NOT NULL REFERENCES "sources"("id"),
   "pattern" INTEGER NOT NULL,
   "kind" INTEGER NOT NULL REFERENCES "kinds"("id"),
   "row" INTEGER,
   "column" INTEGER,
   "replaced_by" INTEGER REFERENCES "imports"("id")
) STRICT;
INSERT INTO "motor" VALUES(1,'Puffinworks','PUFFIN-A',NULL,1,1,1,2,NULL,NULL);
INSERT INTO "motor" VALUES(2,'Puffinworks','PUFFIN-B',NULL,1,1,1,3,NULL,NULL);
INSERT INTO "motor" VALUES(3,'Puffinworks','PUFFIN-C',NULL,1,1,1,4,NULL,NULL);
CREATE TABLE "patterns" (
   "pattern" INTEGER,
   "quantity" TEXT,
   "heading" INTEGER REFERENCES "headings"("id"),
   "read_as" INTEGER,
   "convention" INTEGER REFERENCES "conventions"("id"),
   "row" INTEGER,
   "column" INTEGER,
   PRIMARY KEY ("pattern", "quantity")
) STRICT;
INSERT INTO "patterns" VALUES(1,'nominal_voltage',2,1,1,NULL,2);
INSERT INTO "patterns" VALUES(1,'no_load_speed',3,3,3,NULL,3);
INSERT INTO "patterns" VALUES(1,'no_load_current',4,2,2,NULL,4);
INSERT INTO "patterns" VALUES(1,'torque_constant',5,2,2,NULL,5);
INSERT INTO "patterns" VALUES(1,'speed_constant',6,1,1,NULL,6);
INSERT INTO "patterns" VALUES(1,'terminal_resistance',7,3,3,NULL,7);
INSERT INTO "patterns" VALUES(1,'terminal_inductance',8,3,3,NULL,8);
INSERT INTO "patterns" VALUES(1,'stall_current',9,2,2,NULL,9);
INSERT INTO "patterns" VALUES(1,'rotor_inertia',10,3,3,NULL,10);
INSERT INTO "patterns" VALUES(1,'mass',11,3,3,NULL,11);
CREATE TABLE "points" (
   "motor" INTEGER,
   "number" INTEGER,
   "name" TEXT,
   "row" INTEGER,
   "quantity" TEXT,
   "value" REAL,
   PRIMARY KEY ("motor", "number", "quantity")
) STRICT;
CREATE TABLE "quantities" (
   "kind" TEXT,
   "key" TEXT,
   "unit" TEXT NOT NULL,
   "position" INTEGER NOT NULL,
   PRIMARY KEY ("kind", "key")
) STRICT;
INSERT INTO "quantities" VALUES('figure','nominal_voltage','V',0);
INSERT INTO "quantities" VALUES('figure','mains_voltage','V',1);
INSERT INTO "quantities" VALUES('figure','no_load_speed','rad/s',2);
INSERT INTO "quantities" VALUES('figure','no_load_current','A',3);
INSERT INTO "quantities" VALUES('figure','nominal_speed','rad/s',4);
INSERT INTO "quantities" VALUES('figure','nominal_torque','N·m',5);
INSERT INTO "quantities" VALUES('figure','nominal_current','A',6);
INSERT INTO "quantities" VALUES('figure','stall_torque','N·m',7);
INSERT INTO "quantities" VALUES('figure','stall_current','A',8);
INSERT INTO "quantities" VALUES('figure','continuous_stall_torque','N·m',9);
INSERT INTO "quantities" VALUES('figure','continuous_stall_current','A',10);
INSERT INTO "quantities" VALUES('figure','peak_torque','N·m',11);
INSERT INTO "quantities" VALUES('figure','peak_current','A',12);
INSERT INTO "quantities" VALUES('figure','rated_power','W',13);
INSERT INTO "quantities" VALUES('figure','maximum_power','W',14);
INSERT INTO "quantities" VALUES('figure','maximum_efficiency','1',15);
INSERT INTO "quantities" VALUES('figure','rated_efficiency','1',16);
INSERT INTO "quantities" VALUES('figure','terminal_resistance','Ω',17);
INSERT INTO "quantities" VALUES('figure','terminal_inductance','H',18);
INSERT INTO "quantities" VALUES('figure','torque_constant','N·m/A',19);
INSERT INTO "quantities" VALUES('figure','back_emf_constant','V·s/rad',20);
INSERT INTO "quantities" VALUES('figure','speed_constant','rad/(s·V)',21);
INSERT INTO "quantities" VALUES('figure','speed_torque_gradient','rad/(s·N·m)',22);
INSERT INTO "quantities" VALUES('figure','motor_constant','N·m/√W',23);
INSERT INTO "quantities" VALUES('figure','mechanical_time_constant','s',24);
INSERT INTO "quantities" VALUES('figure','electrical_time_constant','s',25);
INSERT INTO "quantities" VALUES('figure','rotor_inertia','kg·m²',26);
INSERT INTO "quantities" VALUES('figure','friction_torque','N·m',27);
INSERT INTO "quantities" VALUES('figure','viscous_damping','N·m·s/rad',28);
INSERT INTO "quantities" VALUES('figure','cogging_torque','N·m',29);
INSERT INTO "quantities" VALUES('figure','thermal_resistance_winding_housing','K/W',30);
INSERT INTO "quantities" VALUES('figure','thermal_resistance_housing_ambient','K/W',31);
INSERT INTO "quantities" VALUES('figure','thermal_resistance','K/W',32);
INSERT INTO "quantities" VALUES('figure','thermal_time_constant_winding','s',33);
INSERT INTO "quantities" VALUES('figure','thermal_time_constant_housing','s',34);
INSERT INTO "quantities" VALUES('figure','ambient_temperature','°C',35);
INSERT INTO "quantities" VALUES('figure','maximum_winding_temperature','°C',36);
INSERT INTO "quantities" VALUES('figure','rated_temperature_rise','K',37);
INSERT INTO "quantities" VALUES('figure','maximum_speed','rad/s',38);
INSERT INTO "quantities" VALUES('figure','pole_pairs','1',39);
INSERT INTO "quantities" VALUES('figure','poles','1',40);
INSERT INTO "quantities" VALUES('figure','phases','1',41);
INSERT INTO "quantities" VALUES('figure','mass','kg',42);
INSERT INTO "quantities" VALUES('figure','diameter','m',43);
INSERT INTO "quantities" VALUES('figure','length','m',44);
INSERT INTO "quantities" VALUES('figure','shaft_diameter','m',45);
INSERT INTO "quantities" VALUES('figure','axial_load','N',46);
INSERT INTO "quantities" VALUES('figure','radial_load','N',47);
INSERT INTO "quantities" VALUES('figure','price','currency',48);
INSERT INTO "quantities" VALUES('text','description','',49);
INSERT INTO "quantities" VALUES('text','connection','',50);
INSERT INTO "quantities" VALUES('text','magnet','',51);
INSERT INTO "quantities" VALUES('text','commutation','',52);
INSERT INTO "quantities" VALUES('text','protection','',53);
INSERT INTO "quantities" VALUES('constant','torque_constant','N·m/A',54);
INSERT INTO "quantities" VALUES('constant','armature_resistance','Ω',55);
INSERT INTO "quantities" VALUES('constant','armature_inductance','H',56);
INSERT INTO "quantities" VALUES('constant','rotor_inertia','kg·m²',57);
INSERT INTO "quantities" VALUES('constant','no_load_current','A',58);
INSERT INTO "quantities" VALUES('constant','viscous_damping','N·m·s/rad',59);
INSERT INTO "quantities" VALUES('constant','motor_constant','N·m/√W',60);
CREATE TABLE "sources" (
   "id" INTEGER PRIMARY KEY,
   "file" INTEGER NOT NULL REFERENCES "files"("id"),
   "chunk" INTEGER NOT NULL,
   "sheet" TEXT,
   "page" INTEGER,
   "layout" TEXT,
   "notes" TEXT,
   "first_motor" INTEGER NOT NULL,
   "motors" INTEGER NOT NULL
) STRICT;
INSERT INTO "sources" VALUES(1,1,0,NULL,NULL,'rows',NULL,1,3);
CREATE TABLE "unread" (
   "id" INTEGER PRIMARY KEY,
   "file" INTEGER NOT NULL,
   "part_number" TEXT,
   "heading" TEXT,
   "sheet" TEXT,
   "page" INTEGER,
   "row" INTEGER,
   "column" INTEGER,
   "text" TEXT NOT NULL,
   "reason" TEXT NOT NULL,
   "guesses" TEXT
) STRICT;
CREATE UNIQUE INDEX current_motor ON motor(part_number, maker) WHERE replaced_by IS NULL;
CREATE INDEX "findings_of_motor"
    ON "findings" ("motor");
CREATE INDEX "further_figures_of_motor"
    ON "further_figures" ("motor");
CREATE TRIGGER figure_value_update_drops_cache AFTER UPDATE ON figure_value BEGIN DELETE FROM column_cache WHERE source = (SELECT source FROM motor WHERE id = old.id); END;
CREATE TRIGGER figure_value_delete_drops_cache AFTER DELETE ON figure_value BEGIN DELETE FROM column_cache WHERE source = (SELECT source FROM motor WHERE id = old.id); END;
CREATE TRIGGER constants_update_drops_cache AFTER UPDATE ON constants BEGIN DELETE FROM column_cache WHERE source = (SELECT source FROM motor WHERE id = old.id); END;
CREATE TRIGGER constants_delete_drops_cache AFTER DELETE ON constants BEGIN DELETE FROM column_cache WHERE source = (SELECT source FROM motor WHERE id = old.id); END;
CREATE TRIGGER motor_update_drops_cache AFTER UPDATE ON motor BEGIN DELETE FROM column_cache WHERE source = old.source; END;
CREATE TRIGGER motor_delete_drops_cache AFTER DELETE ON motor BEGIN DELETE FROM column_cache WHERE source = old.source; END;
COMMIT;
