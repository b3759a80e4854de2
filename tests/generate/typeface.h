// A typewriter-like face of 5 x 7 dots, drawn for the demo notes.
#ifndef STILLFIELD_TESTS_GENERATE_TYPEFACE_H_
#define STILLFIELD_TESTS_GENERATE_TYPEFACE_H_

namespace stillfield::generate {

inline constexpr int kGlyphWidth = 5;
inline constexpr int kGlyphHeight = 7;

// Whether the dot (column 0..4, row 0..6) of a character is inked. Capitals, digits and
// space - . / : are drawn; every other character is blank.
bool glyph_dot(char character, int column, int row);

}  // namespace stillfield::generate

#endif  // STILLFIELD_TESTS_GENERATE_TYPEFACE_H_
