// Reads a DXF file with the package dxf-parser and prints what it found as JSON.
const fs = require("node:fs");
const DxfParser = require("dxf-parser").default || require("dxf-parser");
const drawing = new DxfParser().parseSync(fs.readFileSync(process.argv[2], "latin1"));
process.stdout.write(
  JSON.stringify({
    header: drawing.header,
    layers: drawing.tables.layer.layers,
    entities: drawing.entities,
  }),
);
