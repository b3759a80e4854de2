// Ink of one delivery note before it meets the scanner.
#ifndef STILLFIELD_TESTS_GENERATE_NOTE_LAYOUT_H_
#define STILLFIELD_TESTS_GENERATE_NOTE_LAYOUT_H_

#include "core/volume.h"
#include "generate/draws.h"

namespace stillfield::generate {

inline constexpr int kNoteWidth = 420;  // pixels of the scan
inline constexpr int kNoteHeight = 594;
inline constexpr int kInkScale = 2;  // layout dots a pixel

// Ink strength at kInkScale dots a pixel: 0 bare paper, 1 fresh ribbon. All text is invented.
Volume<float> note_ink(int number, Draws& draws);

}  // namespace stillfield::generate

#endif  // STILLFIELD_TESTS_GENERATE_NOTE_LAYOUT_H_
