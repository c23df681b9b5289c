#ifndef OHMWRIGHT_H
#define OHMWRIGHT_H

/* Made from src/capi/mod.rs and src/image/fields/mod.rs: do not edit. */

#include <stddef.h>
#include <stdint.h>

/*
 Version of this interface: a caller compiled against another one must not go on.
 */
#define OW_ABI 1

/*
 Most steps of any loop that ends when it has arrived, in every conversion either way, whatever the reading; most kinds of
 model take none or a fixed few (DEVELOPERS.md lists them).
 */
#define OW_MOST_STEPS 32

/*
 A word: nothing was recorded. No number, as with all words but the last two.
 */
#define OW_WORD_MISSING 1

/*
 A word: the text of a recording is no number; no function of this interface gives it.
 */
#define OW_WORD_UNREADABLE 2

/*
 A word: the converter or amplifier stands at an end of its range.
 */
#define OW_WORD_SATURATED 3

/*
 A word: the circuit is broken.
 */
#define OW_WORD_OPEN 4

/*
 A word: the circuit is shorted.
 */
#define OW_WORD_SHORT 5

/*
 A word: the result lies outside the law or its stated range.
 */
#define OW_WORD_OUT_OF_RANGE 6

/*
 A word beside a number: two values explain the reading, and one of them is given.
 */
#define OW_WORD_AMBIGUOUS 7

/*
 A word beside a number: the law was used outside its range, because the model asks for it.
 */
#define OW_WORD_EXTRAPOLATED 8

/*
 A pointer is null that must not be.
 */
#define OW_NULL -1

/*
 A pointer is not aligned as the size functions say.
 */
#define OW_MISALIGNED -2

/*
 Storage is smaller than the size functions say.
 */
#define OW_TOO_SMALL -3

/*
 The storage holds no model, or no draft.
 */
#define OW_NO_MODEL -4

/*
 The image has a version that this build does not know.
 */
#define OW_VERSION -5

/*
 The bytes are no image, or are damaged.
 */
#define OW_CORRUPT -6

/*
 The image has no chain of this number.
 */
#define OW_INDEX -7

/*
 No field has this number, or the value stands for no choice.
 */
#define OW_FIELD -8

/*
 Something that the model needs is missing.
 */
#define OW_MISSING -9

/*
 A value is outside its range, or not finite.
 */
#define OW_VALUE -10

/*
 The stages of the chain do not fit together.
 */
#define OW_UNFIT -11

/*
 The bridge cannot see the wanted strain.
 */
#define OW_BLIND -12

/*
 The lengths of columns differ, or are too long.
 */
#define OW_LENGTH -13

/*
 Something else is wrong.
 */
#define OW_OTHER -99

/*
 What comes with one reading.
 */
typedef struct ow_inputs {
  /*
   The reading, in the unit of the model.
   */
  double reading;
  /*
   The supply, in the unit of its column.
   */
  double supply;
  /*
   Temperature of the gauge, or of a thermocouple's reference junction, °C.
   */
  double celsius;
  /*
   Temperature of the leads, °C.
   */
  double lead_celsius;
  /*
   Temperatures of arms 1-4, °C.
   */
  double arm_celsius[4];
} ow_inputs;

/*
 The same in single precision.
 */
typedef struct ow_inputs_f32 {
  /*
   The reading.
   */
  float reading;
  /*
   The supply.
   */
  float supply;
  /*
   Temperature of the gauge or reference junction, °C.
   */
  float celsius;
  /*
   Temperature of the leads, °C.
   */
  float lead_celsius;
  /*
   Temperatures of arms 1-4, °C.
   */
  float arm_celsius[4];
} ow_inputs_f32;

/*
 Columns of readings; those are null that the model does not use.
 */
typedef struct ow_columns {
  /*
   The readings.
   */
  const double *readings;
  /*
   Their supplies.
   */
  const double *supplies;
  /*
   Temperatures of the gauge or reference junction, °C.
   */
  const double *celsius;
  /*
   Temperatures of the leads, °C.
   */
  const double *lead_celsius;
  /*
   Temperatures of arms 1-4, °C.
   */
  const double *arm_celsius[4];
} ow_columns;

/*
 * Fields of a draft; a name with several fields is the first of them. A value is a double, a choice by its number.
 * What is needed and absent makes OW_MISSING; what else is absent is none, or 0.
 */
/* What is recorded: 0 V, 1 V/V, 2 Ω, 3 codes, 4 the quantity itself. Needed. */
#define OW_FIELD_SIGNAL 0
/* Power of ten of the unit of the readings. */
#define OW_FIELD_READING_EXPONENT 1
/* Bits of the converter; absent = none. */
#define OW_FIELD_CONVERTER_BITS 2
/* Full scale, V; absent with a converter = the supply (ratiometric). */
#define OW_FIELD_CONVERTER_FULL_SCALE 3
/* Coding: 0 signed, 1 offset, 2 unsigned. */
#define OW_FIELD_CONVERTER_CODING 4
/* Amplifier: 0 none, 1 gain, 2 difference. */
#define OW_FIELD_AMPLIFIER 5
/* Gain. */
#define OW_FIELD_GAIN 6
/* Offset referred to the output, V. */
#define OW_FIELD_AMPLIFIER_OFFSET 7
/* Input resistors, Ω, inverting side first: two fields. */
#define OW_FIELD_AMPLIFIER_INPUT 8
/* Feedback resistors, Ω: two fields. */
#define OW_FIELD_AMPLIFIER_FEEDBACK 10
/* Open-loop gain; absent = ideal. */
#define OW_FIELD_OPEN_LOOP_GAIN 12
/* Where the resistors return to: 0 negative supply, 1 centre. */
#define OW_FIELD_AMPLIFIER_REFERENCE 13
/* Supply: 0 none, 1 one value, 2 with every reading. */
#define OW_FIELD_SUPPLY 14
/* Its value, V or A. */
#define OW_FIELD_SUPPLY_VALUE 15
/* Power of ten of the unit of its column. */
#define OW_FIELD_SUPPLY_EXPONENT 16
/* Network: 0 bridge, 1 resistance, 2 divider, 3 none, 4 ratio to a reference resistor, 5 the sensor's own voltage. Needed. */
#define OW_FIELD_NETWORK 17
/* Sensor: 0 gauge, 1 rated transducer, 2 transducer by certificate, 3 platinum, 4 platinum by alpha, delta, beta, 5 ITS-90,
   6 nickel, 7 copper, 8 beta, 9 Steinhart-Hart, 10 logarithm of ratio, 11 reciprocal of temperature, 12 points of a
   thermistor, 13 thermocouple, 14 none. Needed. */
#define OW_FIELD_ELEMENT 18
/* Resistances of the arms, Ω: four fields, all needed by a bridge. Arms 1 and 3 make the output greater, 2 and 4 less. */
#define OW_FIELD_ARM_RESISTANCE 20
/* Arms: 0 fixed, 1 driven along, 2 driven across, 3 dummy: four fields. */
#define OW_FIELD_ARM_KIND 24
/* Their strain factors: four fields. */
#define OW_FIELD_ARM_FACTOR 28
/* Poisson's ratio. */
#define OW_FIELD_POISSON 32
/* 1 where arm 2 was made up to zero with the leads in place, as it is in most loggers; absent = 0, it was not. */
#define OW_FIELD_BALANCED 33
/* 1 where the supply is measured at the bridge. */
#define OW_FIELD_SENSED 34
/* Input resistance, Ω; absent = no load. */
#define OW_FIELD_INPUT_RESISTANCE 35
/* Arm of a shunt, 1 to 4; absent = none. */
#define OW_FIELD_SHUNT_ARM 36
/* Its resistance, Ω. */
#define OW_FIELD_SHUNT_OHMS 37
/* Its place: 0 gauge, 1 instrument. */
#define OW_FIELD_SHUNT_PLACE 38
/* Wires of the sensor: 2, 3, 4; absent = negligible. */
#define OW_FIELD_LEAD_WIRES 39
/* Conductors: 0 alike, 1 each its own. */
#define OW_FIELD_LEAD_KIND 40
/* Their resistances, Ω: three fields; one where they are alike, needed also of four wires, where it takes no part. */
#define OW_FIELD_LEAD_OHMS 41
/* Their lengths, m; where present, they are stated by their run: three fields. */
#define OW_FIELD_LEAD_LENGTH 44
/* Their cross-sections, mm²: three fields. */
#define OW_FIELD_LEAD_AREA 47
/* Their resistivities, Ω·m: three fields. */
#define OW_FIELD_LEAD_RESISTIVITY 50
/* Supply leads: 0 alike, 1 each its own, 2 by their run. */
#define OW_FIELD_SUPPLY_LEADS_KIND 53
/* Their resistances, Ω: two fields. */
#define OW_FIELD_SUPPLY_LEADS_OHMS 54
/* Length, m, cross-section, mm², and resistivity, Ω·m: three fields; a resistance alone stands in the field above. */
#define OW_FIELD_SUPPLY_LEADS_RUN 56
/* Signal leads, the same. */
#define OW_FIELD_SIGNAL_LEADS_KIND 59
/* Their resistances. */
#define OW_FIELD_SIGNAL_LEADS_OHMS 60
/* Their run. */
#define OW_FIELD_SIGNAL_LEADS_RUN 62
/* Temperature coefficient of the leads, 1/K; absent = they do not change. */
#define OW_FIELD_LEAD_COEFFICIENT 65
/* Temperature at which their resistance is stated, °C. */
#define OW_FIELD_LEAD_REFERENCE 66
/* Their temperature: 0 none, 1 one value, 2 with every reading. */
#define OW_FIELD_LEAD_TEMPERATURE_KIND 67
/* The value, °C. */
#define OW_FIELD_LEAD_TEMPERATURE 68
/* Temperature of the gauge or reference junction: 0 none, 1 one value, 2 with every reading. */
#define OW_FIELD_TEMPERATURE_KIND 69
/* The value, °C. */
#define OW_FIELD_TEMPERATURE 70
/* Temperatures of arms: four fields. */
#define OW_FIELD_ARM_TEMPERATURE_KIND 71
/* The values, °C: four fields. */
#define OW_FIELD_ARM_TEMPERATURE 75
/* Reference resistor, Ω. */
#define OW_FIELD_REFERENCE_RESISTOR 79
/* Fixed resistor of a divider, Ω. */
#define OW_FIELD_DIVIDER 80
/* Sensor of a divider: 0 between node and ground, 1 between supply and node; needed by a divider. */
#define OW_FIELD_DIVIDER_SIDE 81
/* Resistor in parallel with a thermometer, Ω; absent = none. */
#define OW_FIELD_PARALLEL 82
/* Insulation resistance across it, Ω; absent = none. */
#define OW_FIELD_LEAKAGE 83
/* Resistor in series with it, Ω; absent = none. */
#define OW_FIELD_SERIES 84
/* Self-heating, K/W; absent = none. */
#define OW_FIELD_SELF_HEATING 85
/* The current that does it, A; absent = that of the circuit. */
#define OW_FIELD_MEASURING_CURRENT 86
/* Transverse sensitivity; absent = none. */
#define OW_FIELD_TRANSVERSE_SENSITIVITY 87
/* Strain across over strain along. */
#define OW_FIELD_STRAIN_RATIO 88
/* Result: 0 strain, 1 shear strain, 2 °C, 3 K, 4 °F, 5 as read (sensors 1, 2, 14). Needed. */
#define OW_FIELD_OUTPUT 89
/* Power of ten that a strain is multiplied by. */
#define OW_FIELD_OUTPUT_EXPONENT 90
/* 1 where laws are used outside their range. */
#define OW_FIELD_EXTRAPOLATE 91
/* Lower limit of the readings; absent = none. */
#define OW_FIELD_LOW_LIMIT 92
/* Its word, OW_WORD_…. */
#define OW_FIELD_LOW_WORD 93
/* Upper limit. */
#define OW_FIELD_HIGH_LIMIT 94
/* Its word. */
#define OW_FIELD_HIGH_WORD 95
/* Gauge factor. */
#define OW_FIELD_GAUGE_FACTOR 96
/* Its slope, 1/K. */
#define OW_FIELD_GAUGE_SLOPE 97
/* Its reference temperature, °C; absent = 24. */
#define OW_FIELD_GAUGE_REFERENCE 98
/* Polynomial of thermal output, microstrain, by powers of the temperature: all seven fields, or none. The zero then
   needs its temperature. */
#define OW_FIELD_THERMAL_COEFFICIENT 99
/* 1 where it is in °F. */
#define OW_FIELD_THERMAL_FAHRENHEIT 106
/* Its gauge factor. */
#define OW_FIELD_THERMAL_GAUGE_FACTOR 107
/* Its range, °C: two fields. */
#define OW_FIELD_THERMAL_RANGE 108
/* Gauge factor of points of thermal output; absent = none. */
#define OW_FIELD_POINTS_GAUGE_FACTOR 110
/* Expansion of the specimen, 1/K; absent = as the data. */
#define OW_FIELD_EXPANSION_SPECIMEN 111
/* Expansion of the material of the data, 1/K. */
#define OW_FIELD_EXPANSION_DATA 112
/* Zero: 0 none, 1 as recorded, 2 as output over supply. */
#define OW_FIELD_ZERO_KIND 113
/* Its reading. */
#define OW_FIELD_ZERO_READING 114
/* Its meaning: 0 strain, 1 resistance, 2 completion. */
#define OW_FIELD_ZERO_MEANING 115
/* Temperature at zero, °C; absent = not stated. */
#define OW_FIELD_ZERO_TEMPERATURE 116
/* Temperature of the leads at zero, °C. */
#define OW_FIELD_ZERO_LEAD_TEMPERATURE 117
/* Temperatures of arms at zero, °C: four fields. */
#define OW_FIELD_ZERO_ARM_TEMPERATURE 118
/* Largest believed |strain|, as a ratio (0.05 is 50 000 microstrain), or |load|: needed by sensors 0 to 2. */
#define OW_FIELD_LIMIT 122
/* Rated output, V/V (sensor 1; its bridge has four driven arms with factors 1, -1, 1, -1). */
#define OW_FIELD_RATED 123
/* The load that gives it, in the unit of the result. */
#define OW_FIELD_CAPACITY 124
/* Polynomial of a certificate: seven fields. */
#define OW_FIELD_CERTIFICATE_COEFFICIENT 125
/* 1 where it gives the output of a load. */
#define OW_FIELD_CERTIFICATE_GIVES_OUTPUT 132
/* Power of ten of the unit of its output. */
#define OW_FIELD_CERTIFICATE_EXPONENT 133
/* What its loads are multiplied by. */
#define OW_FIELD_CERTIFICATE_SCALE 134
/* Its range: two fields. */
#define OW_FIELD_CERTIFICATE_RANGE 135
/* Resistance of the law: R0, R25, at the triple point, of the ratio, Ω. */
#define OW_FIELD_LAW_OHMS 137
/* Coefficients of the law: eight fields. Platinum A, B, C, or alpha, delta, beta; beta of a thermistor in K; Steinhart-Hart
   a, b, c; four terms a, b, c, d; ITS-90 a, b, c, … of its deviation; nickel and copper in the order of their equations. */
#define OW_FIELD_LAW_COEFFICIENT 138
/* Range of the law, °C: two fields. */
#define OW_FIELD_LAW_RANGE 146
/* Subrange of ITS-90: from 0 hydrogen, 1 neon, 2 oxygen, 3 argon to the triple point of water, 4 mercury to gallium, and up
   to 5 gallium, 6 indium, 7 tin, 8 zinc, 9 aluminium, 10 silver. */
#define OW_FIELD_SUBRANGE 148
/* Type of a thermocouple: 0 B, 1 E, 2 J, 3 K, 4 N, 5 R, 6 S, 7 T. */
#define OW_FIELD_THERMOCOUPLE 149
/* What a reading that is passed on is multiplied by (sensor 14); absent = 1. */
#define OW_FIELD_SCALE 150
/* What is added then; absent = 0. */
#define OW_FIELD_SCALE_OFFSET 151
/* Number of points of a table. */
#define OW_FIELD_POINT_COUNT 152
/* Their temperatures, °C: 24 fields. */
#define OW_FIELD_POINT_CELSIUS 153
/* Their values, microstrain or Ω: 24 fields. */
#define OW_FIELD_POINT_VALUE 177

#ifdef __cplusplus
extern "C" {
#endif // __cplusplus

/*
 Returns the version of this interface; compare it with `OW_ABI` of the header.
 */
uint32_t ow_abi(void);

/*
 Returns the version of the library as major · 10000 + minor · 100 + patch.
 */
uint32_t ow_version(void);

/*
 Returns the bytes that a model needs.
 */
size_t ow_model_size(void);

/*
 Returns the alignment that a model needs, in bytes.
 */
size_t ow_model_align(void);

/*
 Returns the bytes that a draft needs.
 */
size_t ow_draft_size(void);

/*
 Returns the alignment that a draft needs, in bytes.
 */
size_t ow_draft_align(void);

/*
 Returns a status in words: static text, never null.
 */
const char *ow_status_str(int32_t status);

/*
 Begins a draft: a chain without any value.

 - `storage`: of at least `ow_draft_size` bytes, aligned to `ow_draft_align`.

 # Safety
 `storage` points at `size` bytes that may be written.
 */
int32_t ow_draft_begin(void *storage, size_t size);

/*
 Sets a field of a draft; the numbers are `OW_FIELD_…` of the header.

 # Safety
 `storage` is null or points at storage of a draft.
 */
int32_t ow_draft_set(void *storage, uint32_t field, double value);

/*
 Says what keeps a draft from being a model: returns what `ow_model_make` would, and writes in `field` the number of the
 field that is missing or wrong, -1 where none is or where it is no single one.

 # Safety
 `from` is null or points at storage of a draft, `field` at a number that may be written.
 */
int32_t ow_draft_check(const void *from, int32_t *field);

/*
 Makes a model of a draft, which stays as it is and may be used again.

 # Safety
 `storage` points at `size` bytes that may be written; `from` is null or points at storage of a draft.
 */
int32_t ow_model_make(void *storage, size_t size, const void *from);

/*
 Returns how many chains an image holds, or an error below 0.

 # Safety
 `image` is null or points at `length` bytes that may be read.
 */
int32_t ow_image_count(const uint8_t *image, size_t length);

/*
 Makes a model of a chain of an image.

 # Safety
 `storage` points at `size` bytes that may be written; `image` is null or points at `length` bytes that may be read.
 */
int32_t ow_model_load(void *storage, size_t size, const uint8_t *image, size_t length, size_t index);

/*
 Copies the name (`unit` = 0) or the unit of the result (`unit` = 1) of a chain of an image, with a final zero, cut to
 `size` bytes; returns its whole length without the zero, or an error below 0.

 # Safety
 `image` is null or points at `length` bytes that may be read; `text` is null or points at `size` bytes that may be
 written.
 */
int32_t ow_image_text(const uint8_t *image, size_t length, size_t index, int32_t unit, char *text, size_t size);

/*
 Converts one reading: the result stands in `out`, NaN where a word above 0 says that there is none.

 A status below 0 is an error of the caller: nothing is written then, so that `out` is what it was.

 Each call checks that no pointer is null or misaligned, and that the first word of the storage is that of a model of this
 version of the interface. The rest of the model was checked when it was made and is trusted: storage that was damaged
 since is not found out.

 # Safety
 `storage` is null or points at storage of a model, `inputs` at inputs that may be read, `out` at a number that may be
 written.
 */
int32_t ow_convert(const void *storage,
                   const struct ow_inputs *inputs,
                   double *out);

/*
 The same in single precision: computed in double precision from the inputs as they are, and rounded once at the end, so
 that the result is within half a unit in the last place of the single-precision format of what [`ow_convert`] gives.

 # Safety
 As [`ow_convert`].
 */
int32_t ow_convert_f32(const void *storage, const struct ow_inputs_f32 *inputs, float *out);

/*
 Returns the reading that a quantity gives, in `out`: the other way round. A word beside the reading is what converting it
 gives beside its number; a quantity or a temperature that is no number is an error below 0.

 # Safety
 As [`ow_convert`].
 */
int32_t ow_expect(const void *storage,
                  double quantity,
                  const struct ow_inputs *inputs,
                  double *out);

/*
 Converts `rows` readings: results in `out`, NaN where there is none, and a word for each in `words` unless that is null;
 `invalid`, unless null, counts the results that are none. Returns 0, or an error below 0, after which nothing was written.
 With no rows the other pointers are not looked at.

 # Safety
 `storage` is null or points at storage of a model, `columns` at columns of `rows` numbers that may be read, `out` at as
 many numbers and `words` at as many bytes that may be written; none of those that are written overlaps any other.
 */
int32_t ow_convert_slice(const void *storage,
                         const struct ow_columns *columns,
                         size_t rows,
                         double *out,
                         uint8_t *words,
                         size_t *invalid);

/*
 Returns which columns a model uses: 1 supplies, 2 temperature of the gauge or reference junction, 4 temperature of the
 leads, 8, 16, 32, 64 temperatures of arms 1-4, added; or an error below 0.

 # Safety
 `storage` is null or points at storage of a model.
 */
int32_t ow_model_uses(const void *storage);

#ifdef __cplusplus
}  // extern "C"
#endif  // __cplusplus

#endif  /* OHMWRIGHT_H */
