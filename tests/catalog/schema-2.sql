-- A bin of schema version 2: one change stands, two were given up, one may be redone. Never changed: later programs must open it.

CREATE TABLE counter (name TEXT PRIMARY KEY, value INTEGER NOT NULL) STRICT;
INSERT INTO "counter" VALUES('lot number',3);
INSERT INTO "counter" VALUES('revision',8);
CREATE TABLE history (
            id INTEGER PRIMARY KEY AUTOINCREMENT,
            at TEXT NOT NULL,
            what TEXT NOT NULL,
            forward TEXT NOT NULL,
            backward TEXT NOT NULL,
            undone INTEGER NOT NULL CHECK (undone IN (0, 1))
        , dropped INTEGER NOT NULL DEFAULT 0 CHECK (dropped IN (0, 1))) STRICT;
INSERT INTO "history" VALUES(1,'2026-12-01T09:33:06Z','add Aluminium 25 V 470 µF','{"changes":[{"after":{"attributes":{"technology":"aluminium"},"family":"capacitor","figures":[{"known":"marked","symbol":"C","value":0.00047},{"known":"marked","symbol":"U_R","value":25.0},{"frequency":100000.0,"kelvin":293.15,"known":"kind","spread":[0.02,0.03,0.045],"symbol":"ESR"}],"id":1,"name":"Aluminium 25 V 470 µF","starter":false},"before":null,"table":"part"}],"what":"add Aluminium 25 V 470 µF"}','{"changes":[{"after":null,"before":{"attributes":{"technology":"aluminium"},"family":"capacitor","figures":[{"known":"marked","symbol":"C","value":0.00047},{"known":"marked","symbol":"U_R","value":25.0},{"frequency":100000.0,"kelvin":293.15,"known":"kind","spread":[0.02,0.03,0.045],"symbol":"ESR"}],"id":1,"name":"Aluminium 25 V 470 µF","starter":false},"table":"part"}],"what":"undo: add Aluminium 25 V 470 µF"}',0,0);
INSERT INTO "history" VALUES(2,'2026-12-01T13:40:00Z','add 9 of Aluminium 25 V 470 µF','{"changes":[{"after":{"count":9,"date_code":"","donor":"","id":1,"note":"","number":1,"origin":"pulled","part_id":1,"place":"Shed / floor"},"before":null,"table":"lot"}],"what":"add 9 of Aluminium 25 V 470 µF"}','{"changes":[{"after":null,"before":{"count":9,"date_code":"","donor":"","id":1,"note":"","number":1,"origin":"pulled","part_id":1,"place":"Shed / floor"},"table":"lot"}],"what":"undo: add 9 of Aluminium 25 V 470 µF"}',1,1);
INSERT INTO "history" VALUES(3,'2026-12-01T13:40:00Z','add 4 of Aluminium 25 V 470 µF','{"changes":[{"after":{"count":4,"date_code":"","donor":"","id":2,"note":"","number":2,"origin":"pulled","part_id":1,"place":"Shed / shelf"},"before":null,"table":"lot"}],"what":"add 4 of Aluminium 25 V 470 µF"}','{"changes":[{"after":null,"before":{"count":4,"date_code":"","donor":"","id":2,"note":"","number":2,"origin":"pulled","part_id":1,"place":"Shed / shelf"},"table":"lot"}],"what":"undo: add 4 of Aluminium 25 V 470 µF"}',1,1);
INSERT INTO "history" VALUES(4,'2026-12-01T13:40:00Z','add 3 of Aluminium 25 V 470 µF','{"changes":[{"after":{"count":3,"date_code":"","donor":"","id":3,"note":"","number":3,"origin":"pulled","part_id":1,"place":"Shed / tin"},"before":null,"table":"lot"}],"what":"add 3 of Aluminium 25 V 470 µF"}','{"changes":[{"after":null,"before":{"count":3,"date_code":"","donor":"","id":3,"note":"","number":3,"origin":"pulled","part_id":1,"place":"Shed / tin"},"table":"lot"}],"what":"undo: add 3 of Aluminium 25 V 470 µF"}',1,0);
CREATE TABLE lot (
            id INTEGER PRIMARY KEY AUTOINCREMENT,
            number INTEGER NOT NULL UNIQUE CHECK (number > 0),
            part_id INTEGER NOT NULL REFERENCES part (id),
            count INTEGER NOT NULL CHECK (count >= 0),
            place TEXT NOT NULL,
            origin TEXT NOT NULL CHECK (origin IN ('new', 'surplus', 'pulled')),
            date_code TEXT NOT NULL,
            donor TEXT NOT NULL,
            note TEXT NOT NULL
        ) STRICT;
CREATE TABLE part (
            id INTEGER PRIMARY KEY AUTOINCREMENT,
            family TEXT NOT NULL CHECK (family IN ('switch', 'rectifier', 'capacitor')),
            name TEXT NOT NULL COLLATE NOCASE UNIQUE CHECK (name <> ''),
            attributes TEXT NOT NULL,
            figures TEXT NOT NULL,
            starter INTEGER NOT NULL CHECK (starter IN (0, 1))
        ) STRICT;
INSERT INTO "part" VALUES(1,'capacitor','Aluminium 25 V 470 µF','{"technology":"aluminium"}','[{"known":"marked","symbol":"C","value":0.00047},{"known":"marked","symbol":"U_R","value":25.0},{"frequency":100000.0,"kelvin":293.15,"known":"kind","spread":[0.02,0.03,0.045],"symbol":"ESR"}]',0);
CREATE TABLE reading (
            id INTEGER PRIMARY KEY AUTOINCREMENT,
            lot_id INTEGER NOT NULL REFERENCES lot (id),
            figure TEXT NOT NULL,
            set_aside INTEGER NOT NULL CHECK (set_aside IN (0, 1))
        ) STRICT;
CREATE INDEX lot_of_part ON lot (part_id);
CREATE INDEX reading_of_lot ON reading (lot_id);
DELETE FROM "sqlite_sequence";
INSERT INTO "sqlite_sequence" VALUES('part',1);
INSERT INTO "sqlite_sequence" VALUES('history',4);
INSERT INTO "sqlite_sequence" VALUES('lot',3);
INSERT INTO "sqlite_sequence" VALUES('reading',1);

PRAGMA application_id = 1651991144;
PRAGMA user_version = 2;
