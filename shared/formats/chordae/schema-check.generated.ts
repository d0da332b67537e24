// @ts-nocheck Compiled from assets/chordae-trees.schema.json by test/tools/make-schema-check.mjs; do not edit.
"use strict";
export const validate = validate20;
export default validate20;
const schema31 = {"$schema":"https://json-schema.org/draft/2020-12/schema","$id":"urn:tautline:chordae-trees:1","title":"Chordae trees","description":"Reference trees of chordae tendineae drawn in one scan (*.chordae.json). Lengths are millimetres, rounded to 1e-6. Keys that are not described here are allowed and survive reading and writing. Beyond this schema: ids of trees, nodes, strands and cross-links are unique in the file; root, from and to name nodes (a strand's of its own tree); radii is as long as points; points begin and end within 1e-3 mm of their nodes; madeBy names points that exist; legs has one entry more than via.","type":"object","required":["format","version","unit","trees"],"properties":{"format":{"const":"chordae-trees"},"version":{"const":1},"unit":{"const":"mm"},"frame":{"description":"LPS, or scan when the source names no patient or lab frame. Missing means scan.","enum":["LPS","scan"]},"volume":{"description":"The scan that the trees lie in; null when they belong to none.","anyOf":[{"type":"null"},{"$ref":"#/$defs/volume"}]},"specimen":{"$ref":"#/$defs/specimen"},"protocol":{"type":["object","null"],"properties":{"id":{"type":"string"},"version":{"type":["number","string"]},"sha256":{"$ref":"#/$defs/sha256"}}},"annotator":{"type":"string"},"pass":{"type":"integer","minimum":0},"created":{"description":"ISO 8601, UTC.","type":"string"},"software":{"type":"object","properties":{"name":{"type":"string"},"version":{"type":"string"}}},"radii":{"description":"Whether radii were corrected for the scan's blur.","enum":["blur-corrected","raw"]},"trees":{"type":"array","items":{"$ref":"#/$defs/tree"}},"crossLinks":{"description":"Strings that join two places of one or two trees.","type":"array","items":{"$ref":"#/$defs/line"}},"landmarks":{"$ref":"#/$defs/landmarks"}},"$defs":{"id":{"type":"string","pattern":"^[\\s\\S]"},"sha256":{"description":"Hexadecimal.","type":["string","null"],"pattern":"^[0-9a-fA-F]{64}$"},"certainty":{"description":"Missing means sure.","enum":["sure","doubtful"]},"muscle":{"enum":["antero-lateral","postero-medial"]},"point":{"description":"x, y, z in millimetres, in the file's frame.","type":"array","prefixItems":[{"type":"number"},{"type":"number"},{"type":"number"}],"minItems":3,"maxItems":3},"points":{"type":"array","items":{"$ref":"#/$defs/point"}},"volume":{"type":"object","properties":{"name":{"type":"string"},"sha256":{"description":"Of the stored array: C order z, y, x, little-endian, in dtype.","$ref":"#/$defs/sha256"},"dtype":{"enum":["uint8","int8","uint16","int16","uint32","int32","uint64","int64","float32","float64"]},"size":{"description":"Voxels along x, y, z.","type":"array","items":{"type":"integer","minimum":1},"minItems":3,"maxItems":3},"spacing":{"description":"Millimetres between voxel centres along x, y, z.","type":"array","items":{"type":"number","exclusiveMinimum":0},"minItems":3,"maxItems":3},"origin":{"description":"Centre of voxel 0, 0, 0.","$ref":"#/$defs/point"},"direction":{"description":"Row-major 3 x 3; position = origin + direction * (index * spacing); an integer index is a voxel's centre.","type":"array","items":{"type":"number"},"minItems":9,"maxItems":9},"handedness":{"enum":["confirmed","unknown"]},"blurFwhm":{"description":"Estimated blur, full width at half maximum, millimetres; null when not estimated.","type":["number","null"],"exclusiveMinimum":0},"derivedFrom":{"description":"The whole scan that this one was cropped or binned from.","type":"object","properties":{"sha256":{"$ref":"#/$defs/sha256"},"crop":{"description":"x0, y0, z0, x1, y1, z1 in voxels of the whole scan; x0 in, x1 out.","type":"array","items":{"type":"integer","minimum":0},"minItems":6,"maxItems":6},"bin":{"description":"Each voxel is the mean of bin^3 voxels, after the crop.","type":"integer","minimum":1}}}}},"specimen":{"type":["object","null"],"properties":{"species":{"type":["string","null"]},"fixation":{"type":["string","null"]},"medium":{"type":["string","null"]},"pressure":{"description":"mmHg","type":["number","null"]},"state":{"type":["string","null"]}}},"tree":{"description":"All that grows from one origin.","type":"object","required":["id","root","nodes","strands"],"properties":{"id":{"$ref":"#/$defs/id"},"name":{"type":"string"},"root":{"description":"Id of the origin's node, or null.","type":["string","null"]},"nodes":{"type":"array","items":{"$ref":"#/$defs/node"}},"strands":{"type":"array","items":{"$ref":"#/$defs/strand"}}}},"node":{"type":"object","required":["id","kind","position"],"properties":{"id":{"$ref":"#/$defs/id"},"kind":{"description":"waypoint: on a strand, neither fork nor end. open: unfinished work.","enum":["origin","fork","waypoint","insertion","muscle-end","wall-end","ruptured","cut","lost-end","scan-edge","open"]},"position":{"$ref":"#/$defs/point"},"certainty":{"$ref":"#/$defs/certainty"},"site":{"description":"Of an origin.","enum":["head","wall","unseen","scan-edge"]},"muscle":{"$ref":"#/$defs/muscle"},"head":{"description":"Number of the papillary muscle head.","type":"integer","minimum":0},"leaflet":{"enum":["anterior","posterior","commissure"]},"segment":{"enum":["A1","A2","A3","P1","P2","P3","AC","PC"]},"zone":{"enum":["free-edge","rough","base"]},"cleft":{"type":"boolean"}}},"line":{"type":"object","required":["id","from","to"],"properties":{"id":{"$ref":"#/$defs/id"},"from":{"$ref":"#/$defs/id"},"to":{"$ref":"#/$defs/id"},"certainty":{"$ref":"#/$defs/certainty"},"points":{"description":"Centreline from node to node, both ends included. Missing (or empty) means not traced.","$ref":"#/$defs/points"},"radii":{"description":"Millimetres, one per point; null where below resolution.","type":"array","items":{"type":["number","null"],"minimum":0}},"via":{"description":"The pins between the two nodes, in order from the first.","$ref":"#/$defs/points"},"madeBy":{"description":"How the stretches of the centreline were made: first and last point index, both included; neighbours share a point.","type":"array","items":{"type":"array","prefixItems":[{"type":"integer","minimum":0},{"type":"integer","minimum":0},{"enum":["guide","follow","straight","edited"]}],"minItems":3,"maxItems":3}},"imageFit":{"description":"How well the centreline follows a string in the scan; null when it was not followed.","type":["number","null"],"minimum":0,"maximum":1}}},"strand":{"description":"The piece between two nodes; it may run either way.","allOf":[{"$ref":"#/$defs/line"}],"type":"object","properties":{"strut":{"type":"boolean"},"legs":{"description":"How each stretch between neighbouring pins is drawn: one entry more than via. Missing means all by the guide.","type":"array","items":{"enum":["guide","straight"]}}}},"landmarks":{"description":"Places of the valve that are not chordae.","type":"object","properties":{"annulus":{"type":"object","required":["closed","points"],"properties":{"closed":{"type":"boolean"},"points":{"$ref":"#/$defs/points"}}},"freeEdges":{"type":"array","items":{"$ref":"#/$defs/points"}},"commissures":{"$ref":"#/$defs/points"},"muscleHeads":{"type":"array","items":{"type":"object","required":["muscle","head","position"],"properties":{"muscle":{"$ref":"#/$defs/muscle"},"head":{"type":"integer","minimum":0},"position":{"$ref":"#/$defs/point"}}}}}}}};
const schema36 = {"type":["object","null"],"properties":{"species":{"type":["string","null"]},"fixation":{"type":["string","null"]},"medium":{"type":["string","null"]},"pressure":{"description":"mmHg","type":["number","null"]},"state":{"type":["string","null"]}}};
const schema33 = {"description":"Hexadecimal.","type":["string","null"],"pattern":"^[0-9a-fA-F]{64}$"};
const schema32 = {"type":"object","properties":{"name":{"type":"string"},"sha256":{"description":"Of the stored array: C order z, y, x, little-endian, in dtype.","$ref":"#/$defs/sha256"},"dtype":{"enum":["uint8","int8","uint16","int16","uint32","int32","uint64","int64","float32","float64"]},"size":{"description":"Voxels along x, y, z.","type":"array","items":{"type":"integer","minimum":1},"minItems":3,"maxItems":3},"spacing":{"description":"Millimetres between voxel centres along x, y, z.","type":"array","items":{"type":"number","exclusiveMinimum":0},"minItems":3,"maxItems":3},"origin":{"description":"Centre of voxel 0, 0, 0.","$ref":"#/$defs/point"},"direction":{"description":"Row-major 3 x 3; position = origin + direction * (index * spacing); an integer index is a voxel's centre.","type":"array","items":{"type":"number"},"minItems":9,"maxItems":9},"handedness":{"enum":["confirmed","unknown"]},"blurFwhm":{"description":"Estimated blur, full width at half maximum, millimetres; null when not estimated.","type":["number","null"],"exclusiveMinimum":0},"derivedFrom":{"description":"The whole scan that this one was cropped or binned from.","type":"object","properties":{"sha256":{"$ref":"#/$defs/sha256"},"crop":{"description":"x0, y0, z0, x1, y1, z1 in voxels of the whole scan; x0 in, x1 out.","type":"array","items":{"type":"integer","minimum":0},"minItems":6,"maxItems":6},"bin":{"description":"Each voxel is the mean of bin^3 voxels, after the crop.","type":"integer","minimum":1}}}}};
const schema34 = {"description":"x, y, z in millimetres, in the file's frame.","type":"array","prefixItems":[{"type":"number"},{"type":"number"},{"type":"number"}],"minItems":3,"maxItems":3};
const pattern4 = new RegExp("^[0-9a-fA-F]{64}$", "u");

function validate21(data, {instancePath="", parentData, parentDataProperty, rootData=data, dynamicAnchors={}}={}){
let vErrors = null;
let errors = 0;
const evaluated0 = validate21.evaluated;
if(evaluated0.dynamicProps){
evaluated0.props = undefined;
}
if(evaluated0.dynamicItems){
evaluated0.items = undefined;
}
if(errors === 0){
if(data && typeof data == "object" && !Array.isArray(data)){
if(data.name !== undefined){
const _errs1 = errors;
if(typeof data.name !== "string"){
validate21.errors = [{instancePath:instancePath+"/name",schemaPath:"#/properties/name/type",keyword:"type",params:{type: "string"},message:"must be string"}];
return false;
}
var valid0 = _errs1 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.sha256 !== undefined){
let data1 = data.sha256;
const _errs3 = errors;
const _errs4 = errors;
if((typeof data1 !== "string") && (data1 !== null)){
validate21.errors = [{instancePath:instancePath+"/sha256",schemaPath:"#/$defs/sha256/type",keyword:"type",params:{type: schema33.type},message:"must be string,null"}];
return false;
}
if(errors === _errs4){
if(typeof data1 === "string"){
if(!pattern4.test(data1)){
validate21.errors = [{instancePath:instancePath+"/sha256",schemaPath:"#/$defs/sha256/pattern",keyword:"pattern",params:{pattern: "^[0-9a-fA-F]{64}$"},message:"must match pattern \""+"^[0-9a-fA-F]{64}$"+"\""}];
return false;
}
}
}
var valid0 = _errs3 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.dtype !== undefined){
let data2 = data.dtype;
const _errs6 = errors;
if(!((((((((((data2 === "uint8") || (data2 === "int8")) || (data2 === "uint16")) || (data2 === "int16")) || (data2 === "uint32")) || (data2 === "int32")) || (data2 === "uint64")) || (data2 === "int64")) || (data2 === "float32")) || (data2 === "float64"))){
validate21.errors = [{instancePath:instancePath+"/dtype",schemaPath:"#/properties/dtype/enum",keyword:"enum",params:{allowedValues: schema32.properties.dtype.enum},message:"must be equal to one of the allowed values"}];
return false;
}
var valid0 = _errs6 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.size !== undefined){
let data3 = data.size;
const _errs7 = errors;
if(errors === _errs7){
if(Array.isArray(data3)){
if(data3.length > 3){
validate21.errors = [{instancePath:instancePath+"/size",schemaPath:"#/properties/size/maxItems",keyword:"maxItems",params:{limit: 3},message:"must NOT have more than 3 items"}];
return false;
}
else {
if(data3.length < 3){
validate21.errors = [{instancePath:instancePath+"/size",schemaPath:"#/properties/size/minItems",keyword:"minItems",params:{limit: 3},message:"must NOT have fewer than 3 items"}];
return false;
}
else {
var valid2 = true;
const len0 = data3.length;
for(let i0=0; i0<len0; i0++){
let data4 = data3[i0];
const _errs9 = errors;
if(!(((typeof data4 == "number") && (!(data4 % 1) && !isNaN(data4))) && (isFinite(data4)))){
validate21.errors = [{instancePath:instancePath+"/size/" + i0,schemaPath:"#/properties/size/items/type",keyword:"type",params:{type: "integer"},message:"must be integer"}];
return false;
}
if(errors === _errs9){
if((typeof data4 == "number") && (isFinite(data4))){
if(data4 < 1 || isNaN(data4)){
validate21.errors = [{instancePath:instancePath+"/size/" + i0,schemaPath:"#/properties/size/items/minimum",keyword:"minimum",params:{comparison: ">=", limit: 1},message:"must be >= 1"}];
return false;
}
}
}
var valid2 = _errs9 === errors;
if(!valid2){
break;
}
}
}
}
}
else {
validate21.errors = [{instancePath:instancePath+"/size",schemaPath:"#/properties/size/type",keyword:"type",params:{type: "array"},message:"must be array"}];
return false;
}
}
var valid0 = _errs7 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.spacing !== undefined){
let data5 = data.spacing;
const _errs11 = errors;
if(errors === _errs11){
if(Array.isArray(data5)){
if(data5.length > 3){
validate21.errors = [{instancePath:instancePath+"/spacing",schemaPath:"#/properties/spacing/maxItems",keyword:"maxItems",params:{limit: 3},message:"must NOT have more than 3 items"}];
return false;
}
else {
if(data5.length < 3){
validate21.errors = [{instancePath:instancePath+"/spacing",schemaPath:"#/properties/spacing/minItems",keyword:"minItems",params:{limit: 3},message:"must NOT have fewer than 3 items"}];
return false;
}
else {
var valid3 = true;
const len1 = data5.length;
for(let i1=0; i1<len1; i1++){
let data6 = data5[i1];
const _errs13 = errors;
if(errors === _errs13){
if((typeof data6 == "number") && (isFinite(data6))){
if(data6 <= 0 || isNaN(data6)){
validate21.errors = [{instancePath:instancePath+"/spacing/" + i1,schemaPath:"#/properties/spacing/items/exclusiveMinimum",keyword:"exclusiveMinimum",params:{comparison: ">", limit: 0},message:"must be > 0"}];
return false;
}
}
else {
validate21.errors = [{instancePath:instancePath+"/spacing/" + i1,schemaPath:"#/properties/spacing/items/type",keyword:"type",params:{type: "number"},message:"must be number"}];
return false;
}
}
var valid3 = _errs13 === errors;
if(!valid3){
break;
}
}
}
}
}
else {
validate21.errors = [{instancePath:instancePath+"/spacing",schemaPath:"#/properties/spacing/type",keyword:"type",params:{type: "array"},message:"must be array"}];
return false;
}
}
var valid0 = _errs11 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.origin !== undefined){
let data7 = data.origin;
const _errs15 = errors;
const _errs16 = errors;
if(errors === _errs16){
if(Array.isArray(data7)){
if(data7.length > 3){
validate21.errors = [{instancePath:instancePath+"/origin",schemaPath:"#/$defs/point/maxItems",keyword:"maxItems",params:{limit: 3},message:"must NOT have more than 3 items"}];
return false;
}
else {
if(data7.length < 3){
validate21.errors = [{instancePath:instancePath+"/origin",schemaPath:"#/$defs/point/minItems",keyword:"minItems",params:{limit: 3},message:"must NOT have fewer than 3 items"}];
return false;
}
else {
const len2 = data7.length;
if(len2 > 0){
let data8 = data7[0];
const _errs18 = errors;
if(!((typeof data8 == "number") && (isFinite(data8)))){
validate21.errors = [{instancePath:instancePath+"/origin/0",schemaPath:"#/$defs/point/prefixItems/0/type",keyword:"type",params:{type: "number"},message:"must be number"}];
return false;
}
var valid5 = _errs18 === errors;
}
if(valid5){
if(len2 > 1){
let data9 = data7[1];
const _errs20 = errors;
if(!((typeof data9 == "number") && (isFinite(data9)))){
validate21.errors = [{instancePath:instancePath+"/origin/1",schemaPath:"#/$defs/point/prefixItems/1/type",keyword:"type",params:{type: "number"},message:"must be number"}];
return false;
}
var valid5 = _errs20 === errors;
}
if(valid5){
if(len2 > 2){
let data10 = data7[2];
const _errs22 = errors;
if(!((typeof data10 == "number") && (isFinite(data10)))){
validate21.errors = [{instancePath:instancePath+"/origin/2",schemaPath:"#/$defs/point/prefixItems/2/type",keyword:"type",params:{type: "number"},message:"must be number"}];
return false;
}
var valid5 = _errs22 === errors;
}
}
}
}
}
}
else {
validate21.errors = [{instancePath:instancePath+"/origin",schemaPath:"#/$defs/point/type",keyword:"type",params:{type: "array"},message:"must be array"}];
return false;
}
}
var valid0 = _errs15 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.direction !== undefined){
let data11 = data.direction;
const _errs24 = errors;
if(errors === _errs24){
if(Array.isArray(data11)){
if(data11.length > 9){
validate21.errors = [{instancePath:instancePath+"/direction",schemaPath:"#/properties/direction/maxItems",keyword:"maxItems",params:{limit: 9},message:"must NOT have more than 9 items"}];
return false;
}
else {
if(data11.length < 9){
validate21.errors = [{instancePath:instancePath+"/direction",schemaPath:"#/properties/direction/minItems",keyword:"minItems",params:{limit: 9},message:"must NOT have fewer than 9 items"}];
return false;
}
else {
var valid6 = true;
const len3 = data11.length;
for(let i2=0; i2<len3; i2++){
let data12 = data11[i2];
const _errs26 = errors;
if(!((typeof data12 == "number") && (isFinite(data12)))){
validate21.errors = [{instancePath:instancePath+"/direction/" + i2,schemaPath:"#/properties/direction/items/type",keyword:"type",params:{type: "number"},message:"must be number"}];
return false;
}
var valid6 = _errs26 === errors;
if(!valid6){
break;
}
}
}
}
}
else {
validate21.errors = [{instancePath:instancePath+"/direction",schemaPath:"#/properties/direction/type",keyword:"type",params:{type: "array"},message:"must be array"}];
return false;
}
}
var valid0 = _errs24 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.handedness !== undefined){
let data13 = data.handedness;
const _errs28 = errors;
if(!((data13 === "confirmed") || (data13 === "unknown"))){
validate21.errors = [{instancePath:instancePath+"/handedness",schemaPath:"#/properties/handedness/enum",keyword:"enum",params:{allowedValues: schema32.properties.handedness.enum},message:"must be equal to one of the allowed values"}];
return false;
}
var valid0 = _errs28 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.blurFwhm !== undefined){
let data14 = data.blurFwhm;
const _errs29 = errors;
if((!((typeof data14 == "number") && (isFinite(data14)))) && (data14 !== null)){
validate21.errors = [{instancePath:instancePath+"/blurFwhm",schemaPath:"#/properties/blurFwhm/type",keyword:"type",params:{type: schema32.properties.blurFwhm.type},message:"must be number,null"}];
return false;
}
if(errors === _errs29){
if((typeof data14 == "number") && (isFinite(data14))){
if(data14 <= 0 || isNaN(data14)){
validate21.errors = [{instancePath:instancePath+"/blurFwhm",schemaPath:"#/properties/blurFwhm/exclusiveMinimum",keyword:"exclusiveMinimum",params:{comparison: ">", limit: 0},message:"must be > 0"}];
return false;
}
}
}
var valid0 = _errs29 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.derivedFrom !== undefined){
let data15 = data.derivedFrom;
const _errs31 = errors;
if(errors === _errs31){
if(data15 && typeof data15 == "object" && !Array.isArray(data15)){
if(data15.sha256 !== undefined){
let data16 = data15.sha256;
const _errs33 = errors;
const _errs34 = errors;
if((typeof data16 !== "string") && (data16 !== null)){
validate21.errors = [{instancePath:instancePath+"/derivedFrom/sha256",schemaPath:"#/$defs/sha256/type",keyword:"type",params:{type: schema33.type},message:"must be string,null"}];
return false;
}
if(errors === _errs34){
if(typeof data16 === "string"){
if(!pattern4.test(data16)){
validate21.errors = [{instancePath:instancePath+"/derivedFrom/sha256",schemaPath:"#/$defs/sha256/pattern",keyword:"pattern",params:{pattern: "^[0-9a-fA-F]{64}$"},message:"must match pattern \""+"^[0-9a-fA-F]{64}$"+"\""}];
return false;
}
}
}
var valid7 = _errs33 === errors;
}
else {
var valid7 = true;
}
if(valid7){
if(data15.crop !== undefined){
let data17 = data15.crop;
const _errs36 = errors;
if(errors === _errs36){
if(Array.isArray(data17)){
if(data17.length > 6){
validate21.errors = [{instancePath:instancePath+"/derivedFrom/crop",schemaPath:"#/properties/derivedFrom/properties/crop/maxItems",keyword:"maxItems",params:{limit: 6},message:"must NOT have more than 6 items"}];
return false;
}
else {
if(data17.length < 6){
validate21.errors = [{instancePath:instancePath+"/derivedFrom/crop",schemaPath:"#/properties/derivedFrom/properties/crop/minItems",keyword:"minItems",params:{limit: 6},message:"must NOT have fewer than 6 items"}];
return false;
}
else {
var valid9 = true;
const len4 = data17.length;
for(let i3=0; i3<len4; i3++){
let data18 = data17[i3];
const _errs38 = errors;
if(!(((typeof data18 == "number") && (!(data18 % 1) && !isNaN(data18))) && (isFinite(data18)))){
validate21.errors = [{instancePath:instancePath+"/derivedFrom/crop/" + i3,schemaPath:"#/properties/derivedFrom/properties/crop/items/type",keyword:"type",params:{type: "integer"},message:"must be integer"}];
return false;
}
if(errors === _errs38){
if((typeof data18 == "number") && (isFinite(data18))){
if(data18 < 0 || isNaN(data18)){
validate21.errors = [{instancePath:instancePath+"/derivedFrom/crop/" + i3,schemaPath:"#/properties/derivedFrom/properties/crop/items/minimum",keyword:"minimum",params:{comparison: ">=", limit: 0},message:"must be >= 0"}];
return false;
}
}
}
var valid9 = _errs38 === errors;
if(!valid9){
break;
}
}
}
}
}
else {
validate21.errors = [{instancePath:instancePath+"/derivedFrom/crop",schemaPath:"#/properties/derivedFrom/properties/crop/type",keyword:"type",params:{type: "array"},message:"must be array"}];
return false;
}
}
var valid7 = _errs36 === errors;
}
else {
var valid7 = true;
}
if(valid7){
if(data15.bin !== undefined){
let data19 = data15.bin;
const _errs40 = errors;
if(!(((typeof data19 == "number") && (!(data19 % 1) && !isNaN(data19))) && (isFinite(data19)))){
validate21.errors = [{instancePath:instancePath+"/derivedFrom/bin",schemaPath:"#/properties/derivedFrom/properties/bin/type",keyword:"type",params:{type: "integer"},message:"must be integer"}];
return false;
}
if(errors === _errs40){
if((typeof data19 == "number") && (isFinite(data19))){
if(data19 < 1 || isNaN(data19)){
validate21.errors = [{instancePath:instancePath+"/derivedFrom/bin",schemaPath:"#/properties/derivedFrom/properties/bin/minimum",keyword:"minimum",params:{comparison: ">=", limit: 1},message:"must be >= 1"}];
return false;
}
}
}
var valid7 = _errs40 === errors;
}
else {
var valid7 = true;
}
}
}
}
else {
validate21.errors = [{instancePath:instancePath+"/derivedFrom",schemaPath:"#/properties/derivedFrom/type",keyword:"type",params:{type: "object"},message:"must be object"}];
return false;
}
}
var valid0 = _errs31 === errors;
}
else {
var valid0 = true;
}
}
}
}
}
}
}
}
}
}
}
else {
validate21.errors = [{instancePath,schemaPath:"#/type",keyword:"type",params:{type: "object"},message:"must be object"}];
return false;
}
}
validate21.errors = vErrors;
return errors === 0;
}
validate21.evaluated = {"props":{"name":true,"sha256":true,"dtype":true,"size":true,"spacing":true,"origin":true,"direction":true,"handedness":true,"blurFwhm":true,"derivedFrom":true},"dynamicProps":false,"dynamicItems":false};

const schema38 = {"description":"All that grows from one origin.","type":"object","required":["id","root","nodes","strands"],"properties":{"id":{"$ref":"#/$defs/id"},"name":{"type":"string"},"root":{"description":"Id of the origin's node, or null.","type":["string","null"]},"nodes":{"type":"array","items":{"$ref":"#/$defs/node"}},"strands":{"type":"array","items":{"$ref":"#/$defs/strand"}}}};
const schema39 = {"type":"string","pattern":"^[\\s\\S]"};
const pattern7 = new RegExp("^[\\s\\S]", "u");
const schema40 = {"type":"object","required":["id","kind","position"],"properties":{"id":{"$ref":"#/$defs/id"},"kind":{"description":"waypoint: on a strand, neither fork nor end. open: unfinished work.","enum":["origin","fork","waypoint","insertion","muscle-end","wall-end","ruptured","cut","lost-end","scan-edge","open"]},"position":{"$ref":"#/$defs/point"},"certainty":{"$ref":"#/$defs/certainty"},"site":{"description":"Of an origin.","enum":["head","wall","unseen","scan-edge"]},"muscle":{"$ref":"#/$defs/muscle"},"head":{"description":"Number of the papillary muscle head.","type":"integer","minimum":0},"leaflet":{"enum":["anterior","posterior","commissure"]},"segment":{"enum":["A1","A2","A3","P1","P2","P3","AC","PC"]},"zone":{"enum":["free-edge","rough","base"]},"cleft":{"type":"boolean"}}};
const schema43 = {"description":"Missing means sure.","enum":["sure","doubtful"]};
const schema44 = {"enum":["antero-lateral","postero-medial"]};

function validate24(data, {instancePath="", parentData, parentDataProperty, rootData=data, dynamicAnchors={}}={}){
let vErrors = null;
let errors = 0;
const evaluated0 = validate24.evaluated;
if(evaluated0.dynamicProps){
evaluated0.props = undefined;
}
if(evaluated0.dynamicItems){
evaluated0.items = undefined;
}
if(errors === 0){
if(data && typeof data == "object" && !Array.isArray(data)){
let missing0;
if((((data.id === undefined) && (missing0 = "id")) || ((data.kind === undefined) && (missing0 = "kind"))) || ((data.position === undefined) && (missing0 = "position"))){
validate24.errors = [{instancePath,schemaPath:"#/required",keyword:"required",params:{missingProperty: missing0},message:"must have required property '"+missing0+"'"}];
return false;
}
else {
if(data.id !== undefined){
let data0 = data.id;
const _errs1 = errors;
const _errs2 = errors;
if(errors === _errs2){
if(typeof data0 === "string"){
if(!pattern7.test(data0)){
validate24.errors = [{instancePath:instancePath+"/id",schemaPath:"#/$defs/id/pattern",keyword:"pattern",params:{pattern: "^[\\s\\S]"},message:"must match pattern \""+"^[\\s\\S]"+"\""}];
return false;
}
}
else {
validate24.errors = [{instancePath:instancePath+"/id",schemaPath:"#/$defs/id/type",keyword:"type",params:{type: "string"},message:"must be string"}];
return false;
}
}
var valid0 = _errs1 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.kind !== undefined){
let data1 = data.kind;
const _errs4 = errors;
if(!(((((((((((data1 === "origin") || (data1 === "fork")) || (data1 === "waypoint")) || (data1 === "insertion")) || (data1 === "muscle-end")) || (data1 === "wall-end")) || (data1 === "ruptured")) || (data1 === "cut")) || (data1 === "lost-end")) || (data1 === "scan-edge")) || (data1 === "open"))){
validate24.errors = [{instancePath:instancePath+"/kind",schemaPath:"#/properties/kind/enum",keyword:"enum",params:{allowedValues: schema40.properties.kind.enum},message:"must be equal to one of the allowed values"}];
return false;
}
var valid0 = _errs4 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.position !== undefined){
let data2 = data.position;
const _errs5 = errors;
const _errs6 = errors;
if(errors === _errs6){
if(Array.isArray(data2)){
if(data2.length > 3){
validate24.errors = [{instancePath:instancePath+"/position",schemaPath:"#/$defs/point/maxItems",keyword:"maxItems",params:{limit: 3},message:"must NOT have more than 3 items"}];
return false;
}
else {
if(data2.length < 3){
validate24.errors = [{instancePath:instancePath+"/position",schemaPath:"#/$defs/point/minItems",keyword:"minItems",params:{limit: 3},message:"must NOT have fewer than 3 items"}];
return false;
}
else {
const len0 = data2.length;
if(len0 > 0){
let data3 = data2[0];
const _errs8 = errors;
if(!((typeof data3 == "number") && (isFinite(data3)))){
validate24.errors = [{instancePath:instancePath+"/position/0",schemaPath:"#/$defs/point/prefixItems/0/type",keyword:"type",params:{type: "number"},message:"must be number"}];
return false;
}
var valid3 = _errs8 === errors;
}
if(valid3){
if(len0 > 1){
let data4 = data2[1];
const _errs10 = errors;
if(!((typeof data4 == "number") && (isFinite(data4)))){
validate24.errors = [{instancePath:instancePath+"/position/1",schemaPath:"#/$defs/point/prefixItems/1/type",keyword:"type",params:{type: "number"},message:"must be number"}];
return false;
}
var valid3 = _errs10 === errors;
}
if(valid3){
if(len0 > 2){
let data5 = data2[2];
const _errs12 = errors;
if(!((typeof data5 == "number") && (isFinite(data5)))){
validate24.errors = [{instancePath:instancePath+"/position/2",schemaPath:"#/$defs/point/prefixItems/2/type",keyword:"type",params:{type: "number"},message:"must be number"}];
return false;
}
var valid3 = _errs12 === errors;
}
}
}
}
}
}
else {
validate24.errors = [{instancePath:instancePath+"/position",schemaPath:"#/$defs/point/type",keyword:"type",params:{type: "array"},message:"must be array"}];
return false;
}
}
var valid0 = _errs5 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.certainty !== undefined){
let data6 = data.certainty;
const _errs14 = errors;
if(!((data6 === "sure") || (data6 === "doubtful"))){
validate24.errors = [{instancePath:instancePath+"/certainty",schemaPath:"#/$defs/certainty/enum",keyword:"enum",params:{allowedValues: schema43.enum},message:"must be equal to one of the allowed values"}];
return false;
}
var valid0 = _errs14 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.site !== undefined){
let data7 = data.site;
const _errs16 = errors;
if(!((((data7 === "head") || (data7 === "wall")) || (data7 === "unseen")) || (data7 === "scan-edge"))){
validate24.errors = [{instancePath:instancePath+"/site",schemaPath:"#/properties/site/enum",keyword:"enum",params:{allowedValues: schema40.properties.site.enum},message:"must be equal to one of the allowed values"}];
return false;
}
var valid0 = _errs16 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.muscle !== undefined){
let data8 = data.muscle;
const _errs17 = errors;
if(!((data8 === "antero-lateral") || (data8 === "postero-medial"))){
validate24.errors = [{instancePath:instancePath+"/muscle",schemaPath:"#/$defs/muscle/enum",keyword:"enum",params:{allowedValues: schema44.enum},message:"must be equal to one of the allowed values"}];
return false;
}
var valid0 = _errs17 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.head !== undefined){
let data9 = data.head;
const _errs19 = errors;
if(!(((typeof data9 == "number") && (!(data9 % 1) && !isNaN(data9))) && (isFinite(data9)))){
validate24.errors = [{instancePath:instancePath+"/head",schemaPath:"#/properties/head/type",keyword:"type",params:{type: "integer"},message:"must be integer"}];
return false;
}
if(errors === _errs19){
if((typeof data9 == "number") && (isFinite(data9))){
if(data9 < 0 || isNaN(data9)){
validate24.errors = [{instancePath:instancePath+"/head",schemaPath:"#/properties/head/minimum",keyword:"minimum",params:{comparison: ">=", limit: 0},message:"must be >= 0"}];
return false;
}
}
}
var valid0 = _errs19 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.leaflet !== undefined){
let data10 = data.leaflet;
const _errs21 = errors;
if(!(((data10 === "anterior") || (data10 === "posterior")) || (data10 === "commissure"))){
validate24.errors = [{instancePath:instancePath+"/leaflet",schemaPath:"#/properties/leaflet/enum",keyword:"enum",params:{allowedValues: schema40.properties.leaflet.enum},message:"must be equal to one of the allowed values"}];
return false;
}
var valid0 = _errs21 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.segment !== undefined){
let data11 = data.segment;
const _errs22 = errors;
if(!((((((((data11 === "A1") || (data11 === "A2")) || (data11 === "A3")) || (data11 === "P1")) || (data11 === "P2")) || (data11 === "P3")) || (data11 === "AC")) || (data11 === "PC"))){
validate24.errors = [{instancePath:instancePath+"/segment",schemaPath:"#/properties/segment/enum",keyword:"enum",params:{allowedValues: schema40.properties.segment.enum},message:"must be equal to one of the allowed values"}];
return false;
}
var valid0 = _errs22 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.zone !== undefined){
let data12 = data.zone;
const _errs23 = errors;
if(!(((data12 === "free-edge") || (data12 === "rough")) || (data12 === "base"))){
validate24.errors = [{instancePath:instancePath+"/zone",schemaPath:"#/properties/zone/enum",keyword:"enum",params:{allowedValues: schema40.properties.zone.enum},message:"must be equal to one of the allowed values"}];
return false;
}
var valid0 = _errs23 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.cleft !== undefined){
const _errs24 = errors;
if(typeof data.cleft !== "boolean"){
validate24.errors = [{instancePath:instancePath+"/cleft",schemaPath:"#/properties/cleft/type",keyword:"type",params:{type: "boolean"},message:"must be boolean"}];
return false;
}
var valid0 = _errs24 === errors;
}
else {
var valid0 = true;
}
}
}
}
}
}
}
}
}
}
}
}
}
else {
validate24.errors = [{instancePath,schemaPath:"#/type",keyword:"type",params:{type: "object"},message:"must be object"}];
return false;
}
}
validate24.errors = vErrors;
return errors === 0;
}
validate24.evaluated = {"props":{"id":true,"kind":true,"position":true,"certainty":true,"site":true,"muscle":true,"head":true,"leaflet":true,"segment":true,"zone":true,"cleft":true},"dynamicProps":false,"dynamicItems":false};

const schema45 = {"description":"The piece between two nodes; it may run either way.","allOf":[{"$ref":"#/$defs/line"}],"type":"object","properties":{"strut":{"type":"boolean"},"legs":{"description":"How each stretch between neighbouring pins is drawn: one entry more than via. Missing means all by the guide.","type":"array","items":{"enum":["guide","straight"]}}}};
const schema46 = {"type":"object","required":["id","from","to"],"properties":{"id":{"$ref":"#/$defs/id"},"from":{"$ref":"#/$defs/id"},"to":{"$ref":"#/$defs/id"},"certainty":{"$ref":"#/$defs/certainty"},"points":{"description":"Centreline from node to node, both ends included. Missing (or empty) means not traced.","$ref":"#/$defs/points"},"radii":{"description":"Millimetres, one per point; null where below resolution.","type":"array","items":{"type":["number","null"],"minimum":0}},"via":{"description":"The pins between the two nodes, in order from the first.","$ref":"#/$defs/points"},"madeBy":{"description":"How the stretches of the centreline were made: first and last point index, both included; neighbours share a point.","type":"array","items":{"type":"array","prefixItems":[{"type":"integer","minimum":0},{"type":"integer","minimum":0},{"enum":["guide","follow","straight","edited"]}],"minItems":3,"maxItems":3}},"imageFit":{"description":"How well the centreline follows a string in the scan; null when it was not followed.","type":["number","null"],"minimum":0,"maximum":1}}};
const schema51 = {"type":"array","items":{"$ref":"#/$defs/point"}};

function validate28(data, {instancePath="", parentData, parentDataProperty, rootData=data, dynamicAnchors={}}={}){
let vErrors = null;
let errors = 0;
const evaluated0 = validate28.evaluated;
if(evaluated0.dynamicProps){
evaluated0.props = undefined;
}
if(evaluated0.dynamicItems){
evaluated0.items = undefined;
}
if(errors === 0){
if(Array.isArray(data)){
var valid0 = true;
const len0 = data.length;
for(let i0=0; i0<len0; i0++){
let data0 = data[i0];
const _errs1 = errors;
const _errs2 = errors;
if(errors === _errs2){
if(Array.isArray(data0)){
if(data0.length > 3){
validate28.errors = [{instancePath:instancePath+"/" + i0,schemaPath:"#/$defs/point/maxItems",keyword:"maxItems",params:{limit: 3},message:"must NOT have more than 3 items"}];
return false;
}
else {
if(data0.length < 3){
validate28.errors = [{instancePath:instancePath+"/" + i0,schemaPath:"#/$defs/point/minItems",keyword:"minItems",params:{limit: 3},message:"must NOT have fewer than 3 items"}];
return false;
}
else {
const len1 = data0.length;
if(len1 > 0){
let data1 = data0[0];
const _errs4 = errors;
if(!((typeof data1 == "number") && (isFinite(data1)))){
validate28.errors = [{instancePath:instancePath+"/" + i0+"/0",schemaPath:"#/$defs/point/prefixItems/0/type",keyword:"type",params:{type: "number"},message:"must be number"}];
return false;
}
var valid2 = _errs4 === errors;
}
if(valid2){
if(len1 > 1){
let data2 = data0[1];
const _errs6 = errors;
if(!((typeof data2 == "number") && (isFinite(data2)))){
validate28.errors = [{instancePath:instancePath+"/" + i0+"/1",schemaPath:"#/$defs/point/prefixItems/1/type",keyword:"type",params:{type: "number"},message:"must be number"}];
return false;
}
var valid2 = _errs6 === errors;
}
if(valid2){
if(len1 > 2){
let data3 = data0[2];
const _errs8 = errors;
if(!((typeof data3 == "number") && (isFinite(data3)))){
validate28.errors = [{instancePath:instancePath+"/" + i0+"/2",schemaPath:"#/$defs/point/prefixItems/2/type",keyword:"type",params:{type: "number"},message:"must be number"}];
return false;
}
var valid2 = _errs8 === errors;
}
}
}
}
}
}
else {
validate28.errors = [{instancePath:instancePath+"/" + i0,schemaPath:"#/$defs/point/type",keyword:"type",params:{type: "array"},message:"must be array"}];
return false;
}
}
var valid0 = _errs1 === errors;
if(!valid0){
break;
}
}
}
else {
validate28.errors = [{instancePath,schemaPath:"#/type",keyword:"type",params:{type: "array"},message:"must be array"}];
return false;
}
}
validate28.errors = vErrors;
return errors === 0;
}
validate28.evaluated = {"items":true,"dynamicProps":false,"dynamicItems":false};


function validate27(data, {instancePath="", parentData, parentDataProperty, rootData=data, dynamicAnchors={}}={}){
let vErrors = null;
let errors = 0;
const evaluated0 = validate27.evaluated;
if(evaluated0.dynamicProps){
evaluated0.props = undefined;
}
if(evaluated0.dynamicItems){
evaluated0.items = undefined;
}
if(errors === 0){
if(data && typeof data == "object" && !Array.isArray(data)){
let missing0;
if((((data.id === undefined) && (missing0 = "id")) || ((data.from === undefined) && (missing0 = "from"))) || ((data.to === undefined) && (missing0 = "to"))){
validate27.errors = [{instancePath,schemaPath:"#/required",keyword:"required",params:{missingProperty: missing0},message:"must have required property '"+missing0+"'"}];
return false;
}
else {
if(data.id !== undefined){
let data0 = data.id;
const _errs1 = errors;
const _errs2 = errors;
if(errors === _errs2){
if(typeof data0 === "string"){
if(!pattern7.test(data0)){
validate27.errors = [{instancePath:instancePath+"/id",schemaPath:"#/$defs/id/pattern",keyword:"pattern",params:{pattern: "^[\\s\\S]"},message:"must match pattern \""+"^[\\s\\S]"+"\""}];
return false;
}
}
else {
validate27.errors = [{instancePath:instancePath+"/id",schemaPath:"#/$defs/id/type",keyword:"type",params:{type: "string"},message:"must be string"}];
return false;
}
}
var valid0 = _errs1 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.from !== undefined){
let data1 = data.from;
const _errs4 = errors;
const _errs5 = errors;
if(errors === _errs5){
if(typeof data1 === "string"){
if(!pattern7.test(data1)){
validate27.errors = [{instancePath:instancePath+"/from",schemaPath:"#/$defs/id/pattern",keyword:"pattern",params:{pattern: "^[\\s\\S]"},message:"must match pattern \""+"^[\\s\\S]"+"\""}];
return false;
}
}
else {
validate27.errors = [{instancePath:instancePath+"/from",schemaPath:"#/$defs/id/type",keyword:"type",params:{type: "string"},message:"must be string"}];
return false;
}
}
var valid0 = _errs4 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.to !== undefined){
let data2 = data.to;
const _errs7 = errors;
const _errs8 = errors;
if(errors === _errs8){
if(typeof data2 === "string"){
if(!pattern7.test(data2)){
validate27.errors = [{instancePath:instancePath+"/to",schemaPath:"#/$defs/id/pattern",keyword:"pattern",params:{pattern: "^[\\s\\S]"},message:"must match pattern \""+"^[\\s\\S]"+"\""}];
return false;
}
}
else {
validate27.errors = [{instancePath:instancePath+"/to",schemaPath:"#/$defs/id/type",keyword:"type",params:{type: "string"},message:"must be string"}];
return false;
}
}
var valid0 = _errs7 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.certainty !== undefined){
let data3 = data.certainty;
const _errs10 = errors;
if(!((data3 === "sure") || (data3 === "doubtful"))){
validate27.errors = [{instancePath:instancePath+"/certainty",schemaPath:"#/$defs/certainty/enum",keyword:"enum",params:{allowedValues: schema43.enum},message:"must be equal to one of the allowed values"}];
return false;
}
var valid0 = _errs10 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.points !== undefined){
const _errs12 = errors;
if(!(validate28(data.points, {instancePath:instancePath+"/points",parentData:data,parentDataProperty:"points",rootData,dynamicAnchors}))){
vErrors = vErrors === null ? validate28.errors : vErrors.concat(validate28.errors);
errors = vErrors.length;
}
var valid0 = _errs12 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.radii !== undefined){
let data5 = data.radii;
const _errs13 = errors;
if(errors === _errs13){
if(Array.isArray(data5)){
var valid5 = true;
const len0 = data5.length;
for(let i0=0; i0<len0; i0++){
let data6 = data5[i0];
const _errs15 = errors;
if((!((typeof data6 == "number") && (isFinite(data6)))) && (data6 !== null)){
validate27.errors = [{instancePath:instancePath+"/radii/" + i0,schemaPath:"#/properties/radii/items/type",keyword:"type",params:{type: schema46.properties.radii.items.type},message:"must be number,null"}];
return false;
}
if(errors === _errs15){
if((typeof data6 == "number") && (isFinite(data6))){
if(data6 < 0 || isNaN(data6)){
validate27.errors = [{instancePath:instancePath+"/radii/" + i0,schemaPath:"#/properties/radii/items/minimum",keyword:"minimum",params:{comparison: ">=", limit: 0},message:"must be >= 0"}];
return false;
}
}
}
var valid5 = _errs15 === errors;
if(!valid5){
break;
}
}
}
else {
validate27.errors = [{instancePath:instancePath+"/radii",schemaPath:"#/properties/radii/type",keyword:"type",params:{type: "array"},message:"must be array"}];
return false;
}
}
var valid0 = _errs13 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.via !== undefined){
const _errs17 = errors;
if(!(validate28(data.via, {instancePath:instancePath+"/via",parentData:data,parentDataProperty:"via",rootData,dynamicAnchors}))){
vErrors = vErrors === null ? validate28.errors : vErrors.concat(validate28.errors);
errors = vErrors.length;
}
var valid0 = _errs17 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.madeBy !== undefined){
let data8 = data.madeBy;
const _errs18 = errors;
if(errors === _errs18){
if(Array.isArray(data8)){
var valid6 = true;
const len1 = data8.length;
for(let i1=0; i1<len1; i1++){
let data9 = data8[i1];
const _errs20 = errors;
if(errors === _errs20){
if(Array.isArray(data9)){
if(data9.length > 3){
validate27.errors = [{instancePath:instancePath+"/madeBy/" + i1,schemaPath:"#/properties/madeBy/items/maxItems",keyword:"maxItems",params:{limit: 3},message:"must NOT have more than 3 items"}];
return false;
}
else {
if(data9.length < 3){
validate27.errors = [{instancePath:instancePath+"/madeBy/" + i1,schemaPath:"#/properties/madeBy/items/minItems",keyword:"minItems",params:{limit: 3},message:"must NOT have fewer than 3 items"}];
return false;
}
else {
const len2 = data9.length;
if(len2 > 0){
let data10 = data9[0];
const _errs22 = errors;
if(!(((typeof data10 == "number") && (!(data10 % 1) && !isNaN(data10))) && (isFinite(data10)))){
validate27.errors = [{instancePath:instancePath+"/madeBy/" + i1+"/0",schemaPath:"#/properties/madeBy/items/prefixItems/0/type",keyword:"type",params:{type: "integer"},message:"must be integer"}];
return false;
}
if(errors === _errs22){
if((typeof data10 == "number") && (isFinite(data10))){
if(data10 < 0 || isNaN(data10)){
validate27.errors = [{instancePath:instancePath+"/madeBy/" + i1+"/0",schemaPath:"#/properties/madeBy/items/prefixItems/0/minimum",keyword:"minimum",params:{comparison: ">=", limit: 0},message:"must be >= 0"}];
return false;
}
}
}
var valid7 = _errs22 === errors;
}
if(valid7){
if(len2 > 1){
let data11 = data9[1];
const _errs24 = errors;
if(!(((typeof data11 == "number") && (!(data11 % 1) && !isNaN(data11))) && (isFinite(data11)))){
validate27.errors = [{instancePath:instancePath+"/madeBy/" + i1+"/1",schemaPath:"#/properties/madeBy/items/prefixItems/1/type",keyword:"type",params:{type: "integer"},message:"must be integer"}];
return false;
}
if(errors === _errs24){
if((typeof data11 == "number") && (isFinite(data11))){
if(data11 < 0 || isNaN(data11)){
validate27.errors = [{instancePath:instancePath+"/madeBy/" + i1+"/1",schemaPath:"#/properties/madeBy/items/prefixItems/1/minimum",keyword:"minimum",params:{comparison: ">=", limit: 0},message:"must be >= 0"}];
return false;
}
}
}
var valid7 = _errs24 === errors;
}
if(valid7){
if(len2 > 2){
let data12 = data9[2];
const _errs26 = errors;
if(!((((data12 === "guide") || (data12 === "follow")) || (data12 === "straight")) || (data12 === "edited"))){
validate27.errors = [{instancePath:instancePath+"/madeBy/" + i1+"/2",schemaPath:"#/properties/madeBy/items/prefixItems/2/enum",keyword:"enum",params:{allowedValues: schema46.properties.madeBy.items.prefixItems[2].enum},message:"must be equal to one of the allowed values"}];
return false;
}
var valid7 = _errs26 === errors;
}
}
}
}
}
}
else {
validate27.errors = [{instancePath:instancePath+"/madeBy/" + i1,schemaPath:"#/properties/madeBy/items/type",keyword:"type",params:{type: "array"},message:"must be array"}];
return false;
}
}
var valid6 = _errs20 === errors;
if(!valid6){
break;
}
}
}
else {
validate27.errors = [{instancePath:instancePath+"/madeBy",schemaPath:"#/properties/madeBy/type",keyword:"type",params:{type: "array"},message:"must be array"}];
return false;
}
}
var valid0 = _errs18 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.imageFit !== undefined){
let data13 = data.imageFit;
const _errs27 = errors;
if((!((typeof data13 == "number") && (isFinite(data13)))) && (data13 !== null)){
validate27.errors = [{instancePath:instancePath+"/imageFit",schemaPath:"#/properties/imageFit/type",keyword:"type",params:{type: schema46.properties.imageFit.type},message:"must be number,null"}];
return false;
}
if(errors === _errs27){
if((typeof data13 == "number") && (isFinite(data13))){
if(data13 > 1 || isNaN(data13)){
validate27.errors = [{instancePath:instancePath+"/imageFit",schemaPath:"#/properties/imageFit/maximum",keyword:"maximum",params:{comparison: "<=", limit: 1},message:"must be <= 1"}];
return false;
}
else {
if(data13 < 0 || isNaN(data13)){
validate27.errors = [{instancePath:instancePath+"/imageFit",schemaPath:"#/properties/imageFit/minimum",keyword:"minimum",params:{comparison: ">=", limit: 0},message:"must be >= 0"}];
return false;
}
}
}
}
var valid0 = _errs27 === errors;
}
else {
var valid0 = true;
}
}
}
}
}
}
}
}
}
}
}
else {
validate27.errors = [{instancePath,schemaPath:"#/type",keyword:"type",params:{type: "object"},message:"must be object"}];
return false;
}
}
validate27.errors = vErrors;
return errors === 0;
}
validate27.evaluated = {"props":{"id":true,"from":true,"to":true,"certainty":true,"points":true,"radii":true,"via":true,"madeBy":true,"imageFit":true},"dynamicProps":false,"dynamicItems":false};


function validate26(data, {instancePath="", parentData, parentDataProperty, rootData=data, dynamicAnchors={}}={}){
let vErrors = null;
let errors = 0;
const evaluated0 = validate26.evaluated;
if(evaluated0.dynamicProps){
evaluated0.props = undefined;
}
if(evaluated0.dynamicItems){
evaluated0.items = undefined;
}
if(!(validate27(data, {instancePath,parentData,parentDataProperty,rootData,dynamicAnchors}))){
vErrors = vErrors === null ? validate27.errors : vErrors.concat(validate27.errors);
errors = vErrors.length;
}
if(errors === 0){
if(data && typeof data == "object" && !Array.isArray(data)){
if(data.strut !== undefined){
const _errs2 = errors;
if(typeof data.strut !== "boolean"){
validate26.errors = [{instancePath:instancePath+"/strut",schemaPath:"#/properties/strut/type",keyword:"type",params:{type: "boolean"},message:"must be boolean"}];
return false;
}
var valid1 = _errs2 === errors;
}
else {
var valid1 = true;
}
if(valid1){
if(data.legs !== undefined){
let data1 = data.legs;
const _errs4 = errors;
if(errors === _errs4){
if(Array.isArray(data1)){
var valid2 = true;
const len0 = data1.length;
for(let i0=0; i0<len0; i0++){
let data2 = data1[i0];
const _errs6 = errors;
if(!((data2 === "guide") || (data2 === "straight"))){
validate26.errors = [{instancePath:instancePath+"/legs/" + i0,schemaPath:"#/properties/legs/items/enum",keyword:"enum",params:{allowedValues: schema45.properties.legs.items.enum},message:"must be equal to one of the allowed values"}];
return false;
}
var valid2 = _errs6 === errors;
if(!valid2){
break;
}
}
}
else {
validate26.errors = [{instancePath:instancePath+"/legs",schemaPath:"#/properties/legs/type",keyword:"type",params:{type: "array"},message:"must be array"}];
return false;
}
}
var valid1 = _errs4 === errors;
}
else {
var valid1 = true;
}
}
}
else {
validate26.errors = [{instancePath,schemaPath:"#/type",keyword:"type",params:{type: "object"},message:"must be object"}];
return false;
}
}
validate26.errors = vErrors;
return errors === 0;
}
validate26.evaluated = {"props":{"strut":true,"legs":true,"id":true,"from":true,"to":true,"certainty":true,"points":true,"radii":true,"via":true,"madeBy":true,"imageFit":true},"dynamicProps":false,"dynamicItems":false};


function validate23(data, {instancePath="", parentData, parentDataProperty, rootData=data, dynamicAnchors={}}={}){
let vErrors = null;
let errors = 0;
const evaluated0 = validate23.evaluated;
if(evaluated0.dynamicProps){
evaluated0.props = undefined;
}
if(evaluated0.dynamicItems){
evaluated0.items = undefined;
}
if(errors === 0){
if(data && typeof data == "object" && !Array.isArray(data)){
let missing0;
if(((((data.id === undefined) && (missing0 = "id")) || ((data.root === undefined) && (missing0 = "root"))) || ((data.nodes === undefined) && (missing0 = "nodes"))) || ((data.strands === undefined) && (missing0 = "strands"))){
validate23.errors = [{instancePath,schemaPath:"#/required",keyword:"required",params:{missingProperty: missing0},message:"must have required property '"+missing0+"'"}];
return false;
}
else {
if(data.id !== undefined){
let data0 = data.id;
const _errs1 = errors;
const _errs2 = errors;
if(errors === _errs2){
if(typeof data0 === "string"){
if(!pattern7.test(data0)){
validate23.errors = [{instancePath:instancePath+"/id",schemaPath:"#/$defs/id/pattern",keyword:"pattern",params:{pattern: "^[\\s\\S]"},message:"must match pattern \""+"^[\\s\\S]"+"\""}];
return false;
}
}
else {
validate23.errors = [{instancePath:instancePath+"/id",schemaPath:"#/$defs/id/type",keyword:"type",params:{type: "string"},message:"must be string"}];
return false;
}
}
var valid0 = _errs1 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.name !== undefined){
const _errs4 = errors;
if(typeof data.name !== "string"){
validate23.errors = [{instancePath:instancePath+"/name",schemaPath:"#/properties/name/type",keyword:"type",params:{type: "string"},message:"must be string"}];
return false;
}
var valid0 = _errs4 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.root !== undefined){
let data2 = data.root;
const _errs6 = errors;
if((typeof data2 !== "string") && (data2 !== null)){
validate23.errors = [{instancePath:instancePath+"/root",schemaPath:"#/properties/root/type",keyword:"type",params:{type: schema38.properties.root.type},message:"must be string,null"}];
return false;
}
var valid0 = _errs6 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.nodes !== undefined){
let data3 = data.nodes;
const _errs8 = errors;
if(errors === _errs8){
if(Array.isArray(data3)){
var valid2 = true;
const len0 = data3.length;
for(let i0=0; i0<len0; i0++){
const _errs10 = errors;
if(!(validate24(data3[i0], {instancePath:instancePath+"/nodes/" + i0,parentData:data3,parentDataProperty:i0,rootData,dynamicAnchors}))){
vErrors = vErrors === null ? validate24.errors : vErrors.concat(validate24.errors);
errors = vErrors.length;
}
var valid2 = _errs10 === errors;
if(!valid2){
break;
}
}
}
else {
validate23.errors = [{instancePath:instancePath+"/nodes",schemaPath:"#/properties/nodes/type",keyword:"type",params:{type: "array"},message:"must be array"}];
return false;
}
}
var valid0 = _errs8 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.strands !== undefined){
let data5 = data.strands;
const _errs11 = errors;
if(errors === _errs11){
if(Array.isArray(data5)){
var valid3 = true;
const len1 = data5.length;
for(let i1=0; i1<len1; i1++){
const _errs13 = errors;
if(!(validate26(data5[i1], {instancePath:instancePath+"/strands/" + i1,parentData:data5,parentDataProperty:i1,rootData,dynamicAnchors}))){
vErrors = vErrors === null ? validate26.errors : vErrors.concat(validate26.errors);
errors = vErrors.length;
}
var valid3 = _errs13 === errors;
if(!valid3){
break;
}
}
}
else {
validate23.errors = [{instancePath:instancePath+"/strands",schemaPath:"#/properties/strands/type",keyword:"type",params:{type: "array"},message:"must be array"}];
return false;
}
}
var valid0 = _errs11 === errors;
}
else {
var valid0 = true;
}
}
}
}
}
}
}
else {
validate23.errors = [{instancePath,schemaPath:"#/type",keyword:"type",params:{type: "object"},message:"must be object"}];
return false;
}
}
validate23.errors = vErrors;
return errors === 0;
}
validate23.evaluated = {"props":{"id":true,"name":true,"root":true,"nodes":true,"strands":true},"dynamicProps":false,"dynamicItems":false};

const schema53 = {"description":"Places of the valve that are not chordae.","type":"object","properties":{"annulus":{"type":"object","required":["closed","points"],"properties":{"closed":{"type":"boolean"},"points":{"$ref":"#/$defs/points"}}},"freeEdges":{"type":"array","items":{"$ref":"#/$defs/points"}},"commissures":{"$ref":"#/$defs/points"},"muscleHeads":{"type":"array","items":{"type":"object","required":["muscle","head","position"],"properties":{"muscle":{"$ref":"#/$defs/muscle"},"head":{"type":"integer","minimum":0},"position":{"$ref":"#/$defs/point"}}}}}};

function validate35(data, {instancePath="", parentData, parentDataProperty, rootData=data, dynamicAnchors={}}={}){
let vErrors = null;
let errors = 0;
const evaluated0 = validate35.evaluated;
if(evaluated0.dynamicProps){
evaluated0.props = undefined;
}
if(evaluated0.dynamicItems){
evaluated0.items = undefined;
}
if(errors === 0){
if(data && typeof data == "object" && !Array.isArray(data)){
if(data.annulus !== undefined){
let data0 = data.annulus;
const _errs1 = errors;
if(errors === _errs1){
if(data0 && typeof data0 == "object" && !Array.isArray(data0)){
let missing0;
if(((data0.closed === undefined) && (missing0 = "closed")) || ((data0.points === undefined) && (missing0 = "points"))){
validate35.errors = [{instancePath:instancePath+"/annulus",schemaPath:"#/properties/annulus/required",keyword:"required",params:{missingProperty: missing0},message:"must have required property '"+missing0+"'"}];
return false;
}
else {
if(data0.closed !== undefined){
const _errs3 = errors;
if(typeof data0.closed !== "boolean"){
validate35.errors = [{instancePath:instancePath+"/annulus/closed",schemaPath:"#/properties/annulus/properties/closed/type",keyword:"type",params:{type: "boolean"},message:"must be boolean"}];
return false;
}
var valid1 = _errs3 === errors;
}
else {
var valid1 = true;
}
if(valid1){
if(data0.points !== undefined){
const _errs5 = errors;
if(!(validate28(data0.points, {instancePath:instancePath+"/annulus/points",parentData:data0,parentDataProperty:"points",rootData,dynamicAnchors}))){
vErrors = vErrors === null ? validate28.errors : vErrors.concat(validate28.errors);
errors = vErrors.length;
}
var valid1 = _errs5 === errors;
}
else {
var valid1 = true;
}
}
}
}
else {
validate35.errors = [{instancePath:instancePath+"/annulus",schemaPath:"#/properties/annulus/type",keyword:"type",params:{type: "object"},message:"must be object"}];
return false;
}
}
var valid0 = _errs1 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.freeEdges !== undefined){
let data3 = data.freeEdges;
const _errs6 = errors;
if(errors === _errs6){
if(Array.isArray(data3)){
var valid2 = true;
const len0 = data3.length;
for(let i0=0; i0<len0; i0++){
const _errs8 = errors;
if(!(validate28(data3[i0], {instancePath:instancePath+"/freeEdges/" + i0,parentData:data3,parentDataProperty:i0,rootData,dynamicAnchors}))){
vErrors = vErrors === null ? validate28.errors : vErrors.concat(validate28.errors);
errors = vErrors.length;
}
var valid2 = _errs8 === errors;
if(!valid2){
break;
}
}
}
else {
validate35.errors = [{instancePath:instancePath+"/freeEdges",schemaPath:"#/properties/freeEdges/type",keyword:"type",params:{type: "array"},message:"must be array"}];
return false;
}
}
var valid0 = _errs6 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.commissures !== undefined){
const _errs9 = errors;
if(!(validate28(data.commissures, {instancePath:instancePath+"/commissures",parentData:data,parentDataProperty:"commissures",rootData,dynamicAnchors}))){
vErrors = vErrors === null ? validate28.errors : vErrors.concat(validate28.errors);
errors = vErrors.length;
}
var valid0 = _errs9 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.muscleHeads !== undefined){
let data6 = data.muscleHeads;
const _errs10 = errors;
if(errors === _errs10){
if(Array.isArray(data6)){
var valid3 = true;
const len1 = data6.length;
for(let i1=0; i1<len1; i1++){
let data7 = data6[i1];
const _errs12 = errors;
if(errors === _errs12){
if(data7 && typeof data7 == "object" && !Array.isArray(data7)){
let missing1;
if((((data7.muscle === undefined) && (missing1 = "muscle")) || ((data7.head === undefined) && (missing1 = "head"))) || ((data7.position === undefined) && (missing1 = "position"))){
validate35.errors = [{instancePath:instancePath+"/muscleHeads/" + i1,schemaPath:"#/properties/muscleHeads/items/required",keyword:"required",params:{missingProperty: missing1},message:"must have required property '"+missing1+"'"}];
return false;
}
else {
if(data7.muscle !== undefined){
let data8 = data7.muscle;
const _errs14 = errors;
if(!((data8 === "antero-lateral") || (data8 === "postero-medial"))){
validate35.errors = [{instancePath:instancePath+"/muscleHeads/" + i1+"/muscle",schemaPath:"#/$defs/muscle/enum",keyword:"enum",params:{allowedValues: schema44.enum},message:"must be equal to one of the allowed values"}];
return false;
}
var valid4 = _errs14 === errors;
}
else {
var valid4 = true;
}
if(valid4){
if(data7.head !== undefined){
let data9 = data7.head;
const _errs16 = errors;
if(!(((typeof data9 == "number") && (!(data9 % 1) && !isNaN(data9))) && (isFinite(data9)))){
validate35.errors = [{instancePath:instancePath+"/muscleHeads/" + i1+"/head",schemaPath:"#/properties/muscleHeads/items/properties/head/type",keyword:"type",params:{type: "integer"},message:"must be integer"}];
return false;
}
if(errors === _errs16){
if((typeof data9 == "number") && (isFinite(data9))){
if(data9 < 0 || isNaN(data9)){
validate35.errors = [{instancePath:instancePath+"/muscleHeads/" + i1+"/head",schemaPath:"#/properties/muscleHeads/items/properties/head/minimum",keyword:"minimum",params:{comparison: ">=", limit: 0},message:"must be >= 0"}];
return false;
}
}
}
var valid4 = _errs16 === errors;
}
else {
var valid4 = true;
}
if(valid4){
if(data7.position !== undefined){
let data10 = data7.position;
const _errs18 = errors;
const _errs19 = errors;
if(errors === _errs19){
if(Array.isArray(data10)){
if(data10.length > 3){
validate35.errors = [{instancePath:instancePath+"/muscleHeads/" + i1+"/position",schemaPath:"#/$defs/point/maxItems",keyword:"maxItems",params:{limit: 3},message:"must NOT have more than 3 items"}];
return false;
}
else {
if(data10.length < 3){
validate35.errors = [{instancePath:instancePath+"/muscleHeads/" + i1+"/position",schemaPath:"#/$defs/point/minItems",keyword:"minItems",params:{limit: 3},message:"must NOT have fewer than 3 items"}];
return false;
}
else {
const len2 = data10.length;
if(len2 > 0){
let data11 = data10[0];
const _errs21 = errors;
if(!((typeof data11 == "number") && (isFinite(data11)))){
validate35.errors = [{instancePath:instancePath+"/muscleHeads/" + i1+"/position/0",schemaPath:"#/$defs/point/prefixItems/0/type",keyword:"type",params:{type: "number"},message:"must be number"}];
return false;
}
var valid7 = _errs21 === errors;
}
if(valid7){
if(len2 > 1){
let data12 = data10[1];
const _errs23 = errors;
if(!((typeof data12 == "number") && (isFinite(data12)))){
validate35.errors = [{instancePath:instancePath+"/muscleHeads/" + i1+"/position/1",schemaPath:"#/$defs/point/prefixItems/1/type",keyword:"type",params:{type: "number"},message:"must be number"}];
return false;
}
var valid7 = _errs23 === errors;
}
if(valid7){
if(len2 > 2){
let data13 = data10[2];
const _errs25 = errors;
if(!((typeof data13 == "number") && (isFinite(data13)))){
validate35.errors = [{instancePath:instancePath+"/muscleHeads/" + i1+"/position/2",schemaPath:"#/$defs/point/prefixItems/2/type",keyword:"type",params:{type: "number"},message:"must be number"}];
return false;
}
var valid7 = _errs25 === errors;
}
}
}
}
}
}
else {
validate35.errors = [{instancePath:instancePath+"/muscleHeads/" + i1+"/position",schemaPath:"#/$defs/point/type",keyword:"type",params:{type: "array"},message:"must be array"}];
return false;
}
}
var valid4 = _errs18 === errors;
}
else {
var valid4 = true;
}
}
}
}
}
else {
validate35.errors = [{instancePath:instancePath+"/muscleHeads/" + i1,schemaPath:"#/properties/muscleHeads/items/type",keyword:"type",params:{type: "object"},message:"must be object"}];
return false;
}
}
var valid3 = _errs12 === errors;
if(!valid3){
break;
}
}
}
else {
validate35.errors = [{instancePath:instancePath+"/muscleHeads",schemaPath:"#/properties/muscleHeads/type",keyword:"type",params:{type: "array"},message:"must be array"}];
return false;
}
}
var valid0 = _errs10 === errors;
}
else {
var valid0 = true;
}
}
}
}
}
else {
validate35.errors = [{instancePath,schemaPath:"#/type",keyword:"type",params:{type: "object"},message:"must be object"}];
return false;
}
}
validate35.errors = vErrors;
return errors === 0;
}
validate35.evaluated = {"props":{"annulus":true,"freeEdges":true,"commissures":true,"muscleHeads":true},"dynamicProps":false,"dynamicItems":false};


function validate20(data, {instancePath="", parentData, parentDataProperty, rootData=data, dynamicAnchors={}}={}){
/*# sourceURL="urn:tautline:chordae-trees:1" */;
let vErrors = null;
let errors = 0;
const evaluated0 = validate20.evaluated;
if(evaluated0.dynamicProps){
evaluated0.props = undefined;
}
if(evaluated0.dynamicItems){
evaluated0.items = undefined;
}
if(errors === 0){
if(data && typeof data == "object" && !Array.isArray(data)){
let missing0;
if(((((data.format === undefined) && (missing0 = "format")) || ((data.version === undefined) && (missing0 = "version"))) || ((data.unit === undefined) && (missing0 = "unit"))) || ((data.trees === undefined) && (missing0 = "trees"))){
validate20.errors = [{instancePath,schemaPath:"#/required",keyword:"required",params:{missingProperty: missing0},message:"must have required property '"+missing0+"'"}];
return false;
}
else {
if(data.format !== undefined){
const _errs1 = errors;
if("chordae-trees" !== data.format){
validate20.errors = [{instancePath:instancePath+"/format",schemaPath:"#/properties/format/const",keyword:"const",params:{allowedValue: "chordae-trees"},message:"must be equal to constant"}];
return false;
}
var valid0 = _errs1 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.version !== undefined){
const _errs2 = errors;
if(1 !== data.version){
validate20.errors = [{instancePath:instancePath+"/version",schemaPath:"#/properties/version/const",keyword:"const",params:{allowedValue: 1},message:"must be equal to constant"}];
return false;
}
var valid0 = _errs2 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.unit !== undefined){
const _errs3 = errors;
if("mm" !== data.unit){
validate20.errors = [{instancePath:instancePath+"/unit",schemaPath:"#/properties/unit/const",keyword:"const",params:{allowedValue: "mm"},message:"must be equal to constant"}];
return false;
}
var valid0 = _errs3 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.frame !== undefined){
let data3 = data.frame;
const _errs4 = errors;
if(!((data3 === "LPS") || (data3 === "scan"))){
validate20.errors = [{instancePath:instancePath+"/frame",schemaPath:"#/properties/frame/enum",keyword:"enum",params:{allowedValues: schema31.properties.frame.enum},message:"must be equal to one of the allowed values"}];
return false;
}
var valid0 = _errs4 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.volume !== undefined){
let data4 = data.volume;
const _errs5 = errors;
const _errs6 = errors;
let valid1 = false;
const _errs7 = errors;
if(data4 !== null){
const err0 = {instancePath:instancePath+"/volume",schemaPath:"#/properties/volume/anyOf/0/type",keyword:"type",params:{type: "null"},message:"must be null"};
if(vErrors === null){
vErrors = [err0];
}
else {
vErrors.push(err0);
}
errors++;
}
var _valid0 = _errs7 === errors;
valid1 = valid1 || _valid0;
const _errs9 = errors;
if(!(validate21(data4, {instancePath:instancePath+"/volume",parentData:data,parentDataProperty:"volume",rootData,dynamicAnchors}))){
vErrors = vErrors === null ? validate21.errors : vErrors.concat(validate21.errors);
errors = vErrors.length;
}
var _valid0 = _errs9 === errors;
valid1 = valid1 || _valid0;
if(_valid0){
var props0 = {};
props0.name = true;
props0.sha256 = true;
props0.dtype = true;
props0.size = true;
props0.spacing = true;
props0.origin = true;
props0.direction = true;
props0.handedness = true;
props0.blurFwhm = true;
props0.derivedFrom = true;
}
if(!valid1){
const err1 = {instancePath:instancePath+"/volume",schemaPath:"#/properties/volume/anyOf",keyword:"anyOf",params:{},message:"must match a schema in anyOf"};
if(vErrors === null){
vErrors = [err1];
}
else {
vErrors.push(err1);
}
errors++;
validate20.errors = vErrors;
return false;
}
else {
errors = _errs6;
if(vErrors !== null){
if(_errs6){
vErrors.length = _errs6;
}
else {
vErrors = null;
}
}
}
var valid0 = _errs5 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.specimen !== undefined){
let data5 = data.specimen;
const _errs10 = errors;
const _errs11 = errors;
if((!(data5 && typeof data5 == "object" && !Array.isArray(data5))) && (data5 !== null)){
validate20.errors = [{instancePath:instancePath+"/specimen",schemaPath:"#/$defs/specimen/type",keyword:"type",params:{type: schema36.type},message:"must be object,null"}];
return false;
}
if(errors === _errs11){
if(data5 && typeof data5 == "object" && !Array.isArray(data5)){
if(data5.species !== undefined){
let data6 = data5.species;
const _errs13 = errors;
if((typeof data6 !== "string") && (data6 !== null)){
validate20.errors = [{instancePath:instancePath+"/specimen/species",schemaPath:"#/$defs/specimen/properties/species/type",keyword:"type",params:{type: schema36.properties.species.type},message:"must be string,null"}];
return false;
}
var valid3 = _errs13 === errors;
}
else {
var valid3 = true;
}
if(valid3){
if(data5.fixation !== undefined){
let data7 = data5.fixation;
const _errs15 = errors;
if((typeof data7 !== "string") && (data7 !== null)){
validate20.errors = [{instancePath:instancePath+"/specimen/fixation",schemaPath:"#/$defs/specimen/properties/fixation/type",keyword:"type",params:{type: schema36.properties.fixation.type},message:"must be string,null"}];
return false;
}
var valid3 = _errs15 === errors;
}
else {
var valid3 = true;
}
if(valid3){
if(data5.medium !== undefined){
let data8 = data5.medium;
const _errs17 = errors;
if((typeof data8 !== "string") && (data8 !== null)){
validate20.errors = [{instancePath:instancePath+"/specimen/medium",schemaPath:"#/$defs/specimen/properties/medium/type",keyword:"type",params:{type: schema36.properties.medium.type},message:"must be string,null"}];
return false;
}
var valid3 = _errs17 === errors;
}
else {
var valid3 = true;
}
if(valid3){
if(data5.pressure !== undefined){
let data9 = data5.pressure;
const _errs19 = errors;
if((!((typeof data9 == "number") && (isFinite(data9)))) && (data9 !== null)){
validate20.errors = [{instancePath:instancePath+"/specimen/pressure",schemaPath:"#/$defs/specimen/properties/pressure/type",keyword:"type",params:{type: schema36.properties.pressure.type},message:"must be number,null"}];
return false;
}
var valid3 = _errs19 === errors;
}
else {
var valid3 = true;
}
if(valid3){
if(data5.state !== undefined){
let data10 = data5.state;
const _errs21 = errors;
if((typeof data10 !== "string") && (data10 !== null)){
validate20.errors = [{instancePath:instancePath+"/specimen/state",schemaPath:"#/$defs/specimen/properties/state/type",keyword:"type",params:{type: schema36.properties.state.type},message:"must be string,null"}];
return false;
}
var valid3 = _errs21 === errors;
}
else {
var valid3 = true;
}
}
}
}
}
}
}
var valid0 = _errs10 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.protocol !== undefined){
let data11 = data.protocol;
const _errs23 = errors;
if((!(data11 && typeof data11 == "object" && !Array.isArray(data11))) && (data11 !== null)){
validate20.errors = [{instancePath:instancePath+"/protocol",schemaPath:"#/properties/protocol/type",keyword:"type",params:{type: schema31.properties.protocol.type},message:"must be object,null"}];
return false;
}
if(errors === _errs23){
if(data11 && typeof data11 == "object" && !Array.isArray(data11)){
if(data11.id !== undefined){
const _errs25 = errors;
if(typeof data11.id !== "string"){
validate20.errors = [{instancePath:instancePath+"/protocol/id",schemaPath:"#/properties/protocol/properties/id/type",keyword:"type",params:{type: "string"},message:"must be string"}];
return false;
}
var valid4 = _errs25 === errors;
}
else {
var valid4 = true;
}
if(valid4){
if(data11.version !== undefined){
let data13 = data11.version;
const _errs27 = errors;
if((!((typeof data13 == "number") && (isFinite(data13)))) && (typeof data13 !== "string")){
validate20.errors = [{instancePath:instancePath+"/protocol/version",schemaPath:"#/properties/protocol/properties/version/type",keyword:"type",params:{type: schema31.properties.protocol.properties.version.type},message:"must be number,string"}];
return false;
}
var valid4 = _errs27 === errors;
}
else {
var valid4 = true;
}
if(valid4){
if(data11.sha256 !== undefined){
let data14 = data11.sha256;
const _errs29 = errors;
const _errs30 = errors;
if((typeof data14 !== "string") && (data14 !== null)){
validate20.errors = [{instancePath:instancePath+"/protocol/sha256",schemaPath:"#/$defs/sha256/type",keyword:"type",params:{type: schema33.type},message:"must be string,null"}];
return false;
}
if(errors === _errs30){
if(typeof data14 === "string"){
if(!pattern4.test(data14)){
validate20.errors = [{instancePath:instancePath+"/protocol/sha256",schemaPath:"#/$defs/sha256/pattern",keyword:"pattern",params:{pattern: "^[0-9a-fA-F]{64}$"},message:"must match pattern \""+"^[0-9a-fA-F]{64}$"+"\""}];
return false;
}
}
}
var valid4 = _errs29 === errors;
}
else {
var valid4 = true;
}
}
}
}
}
var valid0 = _errs23 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.annotator !== undefined){
const _errs32 = errors;
if(typeof data.annotator !== "string"){
validate20.errors = [{instancePath:instancePath+"/annotator",schemaPath:"#/properties/annotator/type",keyword:"type",params:{type: "string"},message:"must be string"}];
return false;
}
var valid0 = _errs32 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.pass !== undefined){
let data16 = data.pass;
const _errs34 = errors;
if(!(((typeof data16 == "number") && (!(data16 % 1) && !isNaN(data16))) && (isFinite(data16)))){
validate20.errors = [{instancePath:instancePath+"/pass",schemaPath:"#/properties/pass/type",keyword:"type",params:{type: "integer"},message:"must be integer"}];
return false;
}
if(errors === _errs34){
if((typeof data16 == "number") && (isFinite(data16))){
if(data16 < 0 || isNaN(data16)){
validate20.errors = [{instancePath:instancePath+"/pass",schemaPath:"#/properties/pass/minimum",keyword:"minimum",params:{comparison: ">=", limit: 0},message:"must be >= 0"}];
return false;
}
}
}
var valid0 = _errs34 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.created !== undefined){
const _errs36 = errors;
if(typeof data.created !== "string"){
validate20.errors = [{instancePath:instancePath+"/created",schemaPath:"#/properties/created/type",keyword:"type",params:{type: "string"},message:"must be string"}];
return false;
}
var valid0 = _errs36 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.software !== undefined){
let data18 = data.software;
const _errs38 = errors;
if(errors === _errs38){
if(data18 && typeof data18 == "object" && !Array.isArray(data18)){
if(data18.name !== undefined){
const _errs40 = errors;
if(typeof data18.name !== "string"){
validate20.errors = [{instancePath:instancePath+"/software/name",schemaPath:"#/properties/software/properties/name/type",keyword:"type",params:{type: "string"},message:"must be string"}];
return false;
}
var valid6 = _errs40 === errors;
}
else {
var valid6 = true;
}
if(valid6){
if(data18.version !== undefined){
const _errs42 = errors;
if(typeof data18.version !== "string"){
validate20.errors = [{instancePath:instancePath+"/software/version",schemaPath:"#/properties/software/properties/version/type",keyword:"type",params:{type: "string"},message:"must be string"}];
return false;
}
var valid6 = _errs42 === errors;
}
else {
var valid6 = true;
}
}
}
else {
validate20.errors = [{instancePath:instancePath+"/software",schemaPath:"#/properties/software/type",keyword:"type",params:{type: "object"},message:"must be object"}];
return false;
}
}
var valid0 = _errs38 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.radii !== undefined){
let data21 = data.radii;
const _errs44 = errors;
if(!((data21 === "blur-corrected") || (data21 === "raw"))){
validate20.errors = [{instancePath:instancePath+"/radii",schemaPath:"#/properties/radii/enum",keyword:"enum",params:{allowedValues: schema31.properties.radii.enum},message:"must be equal to one of the allowed values"}];
return false;
}
var valid0 = _errs44 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.trees !== undefined){
let data22 = data.trees;
const _errs45 = errors;
if(errors === _errs45){
if(Array.isArray(data22)){
var valid7 = true;
const len0 = data22.length;
for(let i0=0; i0<len0; i0++){
const _errs47 = errors;
if(!(validate23(data22[i0], {instancePath:instancePath+"/trees/" + i0,parentData:data22,parentDataProperty:i0,rootData,dynamicAnchors}))){
vErrors = vErrors === null ? validate23.errors : vErrors.concat(validate23.errors);
errors = vErrors.length;
}
var valid7 = _errs47 === errors;
if(!valid7){
break;
}
}
}
else {
validate20.errors = [{instancePath:instancePath+"/trees",schemaPath:"#/properties/trees/type",keyword:"type",params:{type: "array"},message:"must be array"}];
return false;
}
}
var valid0 = _errs45 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.crossLinks !== undefined){
let data24 = data.crossLinks;
const _errs48 = errors;
if(errors === _errs48){
if(Array.isArray(data24)){
var valid8 = true;
const len1 = data24.length;
for(let i1=0; i1<len1; i1++){
const _errs50 = errors;
if(!(validate27(data24[i1], {instancePath:instancePath+"/crossLinks/" + i1,parentData:data24,parentDataProperty:i1,rootData,dynamicAnchors}))){
vErrors = vErrors === null ? validate27.errors : vErrors.concat(validate27.errors);
errors = vErrors.length;
}
var valid8 = _errs50 === errors;
if(!valid8){
break;
}
}
}
else {
validate20.errors = [{instancePath:instancePath+"/crossLinks",schemaPath:"#/properties/crossLinks/type",keyword:"type",params:{type: "array"},message:"must be array"}];
return false;
}
}
var valid0 = _errs48 === errors;
}
else {
var valid0 = true;
}
if(valid0){
if(data.landmarks !== undefined){
const _errs51 = errors;
if(!(validate35(data.landmarks, {instancePath:instancePath+"/landmarks",parentData:data,parentDataProperty:"landmarks",rootData,dynamicAnchors}))){
vErrors = vErrors === null ? validate35.errors : vErrors.concat(validate35.errors);
errors = vErrors.length;
}
var valid0 = _errs51 === errors;
}
else {
var valid0 = true;
}
}
}
}
}
}
}
}
}
}
}
}
}
}
}
}
}
else {
validate20.errors = [{instancePath,schemaPath:"#/type",keyword:"type",params:{type: "object"},message:"must be object"}];
return false;
}
}
validate20.errors = vErrors;
return errors === 0;
}
validate20.evaluated = {"props":{"format":true,"version":true,"unit":true,"frame":true,"volume":true,"specimen":true,"protocol":true,"annotator":true,"pass":true,"created":true,"software":true,"radii":true,"trees":true,"crossLinks":true,"landmarks":true},"dynamicProps":false,"dynamicItems":false};
