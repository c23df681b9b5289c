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
 * Fields of a draft; a name with several fields is the first of them.
 */
#define OW_FIELD_SIGNAL 0
#define OW_FIELD_READING_EXPONENT 1
#define OW_FIELD_CONVERTER_BITS 2
#define OW_FIELD_CONVERTER_FULL_SCALE 3
#define OW_FIELD_CONVERTER_CODING 4
#define OW_FIELD_AMPLIFIER 5
#define OW_FIELD_GAIN 6
#define OW_FIELD_AMPLIFIER_OFFSET 7
#define OW_FIELD_AMPLIFIER_INPUT 8
#define OW_FIELD_AMPLIFIER_FEEDBACK 10
#define OW_FIELD_OPEN_LOOP_GAIN 12
#define OW_FIELD_AMPLIFIER_REFERENCE 13
#define OW_FIELD_SUPPLY 14
#define OW_FIELD_SUPPLY_VALUE 15
#define OW_FIELD_SUPPLY_EXPONENT 16
#define OW_FIELD_NETWORK 17
#define OW_FIELD_ELEMENT 18
#define OW_FIELD_ARM_RESISTANCE 20
#define OW_FIELD_ARM_KIND 24
#define OW_FIELD_ARM_FACTOR 28
#define OW_FIELD_POISSON 32
#define OW_FIELD_BALANCED 33
#define OW_FIELD_SENSED 34
#define OW_FIELD_INPUT_RESISTANCE 35
#define OW_FIELD_SHUNT_ARM 36
#define OW_FIELD_SHUNT_OHMS 37
#define OW_FIELD_SHUNT_PLACE 38
#define OW_FIELD_LEAD_WIRES 39
#define OW_FIELD_LEAD_KIND 40
#define OW_FIELD_LEAD_OHMS 41
#define OW_FIELD_LEAD_LENGTH 44
#define OW_FIELD_LEAD_AREA 47
#define OW_FIELD_LEAD_RESISTIVITY 50
#define OW_FIELD_SUPPLY_LEADS_KIND 53
#define OW_FIELD_SUPPLY_LEADS_OHMS 54
#define OW_FIELD_SUPPLY_LEADS_RUN 56
#define OW_FIELD_SIGNAL_LEADS_KIND 59
#define OW_FIELD_SIGNAL_LEADS_OHMS 60
#define OW_FIELD_SIGNAL_LEADS_RUN 62
#define OW_FIELD_LEAD_COEFFICIENT 65
#define OW_FIELD_LEAD_REFERENCE 66
#define OW_FIELD_LEAD_TEMPERATURE_KIND 67
#define OW_FIELD_LEAD_TEMPERATURE 68
#define OW_FIELD_TEMPERATURE_KIND 69
#define OW_FIELD_TEMPERATURE 70
#define OW_FIELD_ARM_TEMPERATURE_KIND 71
#define OW_FIELD_ARM_TEMPERATURE 75
#define OW_FIELD_REFERENCE_RESISTOR 79
#define OW_FIELD_DIVIDER 80
#define OW_FIELD_DIVIDER_SIDE 81
#define OW_FIELD_PARALLEL 82
#define OW_FIELD_LEAKAGE 83
#define OW_FIELD_SERIES 84
#define OW_FIELD_SELF_HEATING 85
#define OW_FIELD_MEASURING_CURRENT 86
#define OW_FIELD_TRANSVERSE_SENSITIVITY 87
#define OW_FIELD_STRAIN_RATIO 88
#define OW_FIELD_OUTPUT 89
#define OW_FIELD_OUTPUT_EXPONENT 90
#define OW_FIELD_EXTRAPOLATE 91
#define OW_FIELD_LOW_LIMIT 92
#define OW_FIELD_LOW_WORD 93
#define OW_FIELD_HIGH_LIMIT 94
#define OW_FIELD_HIGH_WORD 95
#define OW_FIELD_GAUGE_FACTOR 96
#define OW_FIELD_GAUGE_SLOPE 97
#define OW_FIELD_GAUGE_REFERENCE 98
#define OW_FIELD_THERMAL_COEFFICIENT 99
#define OW_FIELD_THERMAL_FAHRENHEIT 106
#define OW_FIELD_THERMAL_GAUGE_FACTOR 107
#define OW_FIELD_THERMAL_RANGE 108
#define OW_FIELD_POINTS_GAUGE_FACTOR 110
#define OW_FIELD_EXPANSION_SPECIMEN 111
#define OW_FIELD_EXPANSION_DATA 112
#define OW_FIELD_ZERO_KIND 113
#define OW_FIELD_ZERO_READING 114
#define OW_FIELD_ZERO_MEANING 115
#define OW_FIELD_ZERO_TEMPERATURE 116
#define OW_FIELD_ZERO_LEAD_TEMPERATURE 117
#define OW_FIELD_ZERO_ARM_TEMPERATURE 118
#define OW_FIELD_LIMIT 122
#define OW_FIELD_RATED 123
#define OW_FIELD_CAPACITY 124
#define OW_FIELD_CERTIFICATE_COEFFICIENT 125
#define OW_FIELD_CERTIFICATE_GIVES_OUTPUT 132
#define OW_FIELD_CERTIFICATE_EXPONENT 133
#define OW_FIELD_CERTIFICATE_SCALE 134
#define OW_FIELD_CERTIFICATE_RANGE 135
#define OW_FIELD_LAW_OHMS 137
#define OW_FIELD_LAW_COEFFICIENT 138
#define OW_FIELD_LAW_RANGE 146
#define OW_FIELD_SUBRANGE 148
#define OW_FIELD_THERMOCOUPLE 149
#define OW_FIELD_SCALE 150
#define OW_FIELD_SCALE_OFFSET 151
#define OW_FIELD_POINT_COUNT 152
#define OW_FIELD_POINT_CELSIUS 153
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
 Makes a model of a draft.

 # Safety
 `storage` points at `size` bytes that may be written; `from` is null or points at storage of a draft.
 */
int32_t ow_model_make(void *storage, size_t size, void *from);

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
 Returns the reading that a quantity gives, in `out`: the other way round.

 # Safety
 As [`ow_convert`].
 */
int32_t ow_expect(const void *storage, double quantity, const struct ow_inputs *inputs, double *out);

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
