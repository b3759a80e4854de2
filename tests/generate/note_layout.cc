#include "generate/note_layout.h"

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <string>
#include <utility>

#include "generate/picture.h"
#include "generate/typeface.h"

namespace stillfield::generate {
namespace {

// Positions and sizes in layout dots.
class Sheet {
 public:
  explicit Sheet(Draws& draws)
      : ink_({kNoteWidth * kInkScale, kNoteHeight * kInkScale}), draws_(draws) {}

  void box(int x0, int y0, int x1, int y1, double strength) {
    for (int y = std::max(y0, 0); y < std::min(y1, ink_.height()); ++y) {
      for (int x = std::max(x0, 0); x < std::min(x1, ink_.width()); ++x) {
        ink_.at(x, y) = static_cast<float>(strength);
      }
    }
  }

  void frame(int x0, int y0, int x1, int y1, int thick, double strength) {
    box(x0, y0, x1, y0 + thick, strength);
    box(x0, y1 - thick, x1, y1, strength);
    box(x0, y0, x0 + thick, y1, strength);
    box(x1 - thick, y0, x1, y1, strength);
  }

  // Each stroke of a type bar lands a little higher or lower, harder or softer.
  void text(int x, int y, const std::string& words, int dot, double strength) {
    for (const char c : words) {
      const int lift = draws_.below(3) - 1;
      const double pressed = std::min(1.0, strength * draws_.uniform(0.88, 1.06));
      for (int row = 0; row < kGlyphHeight; ++row) {
        for (int column = 0; column < kGlyphWidth; ++column) {
          if (!glyph_dot(c, column, row)) continue;
          const int left = x + column * dot, top = y + row * dot + lift;
          box(left, top, left + dot, top + dot, pressed);
        }
      }
      x += (kGlyphWidth + 1) * dot;
    }
  }

  // A pen line that wanders like a signature, in the square (x, y) .. (x + width, y + height).
  void scribble(int x, int y, int width, int height) {
    const SmoothField across(draws_.bits(), 55), along(draws_.bits(), 40);
    for (int step = 0; step < 4000; ++step) {
      const double t = step * 0.25;
      const double px = x + width * (step / 4000.0) + 26 * along.at(t, 0.5);
      const double py = y + height * (0.5 + 0.55 * across.at(t, 0.5));
      const int left = static_cast<int>(px), top = static_cast<int>(py);
      box(left, top, left + 3, top + 3, 0.95);
    }
  }

  Volume<float> take() { return std::move(ink_); }

 private:
  Volume<float> ink_;
  Draws& draws_;
};

std::string format(const char* pattern, int a, int b = 0) {
  char line[64];
  std::snprintf(line, sizeof line, pattern, a, b);
  return line;
}

std::string padded(std::string text, std::size_t width) {
  if (text.size() < width) text.resize(width, ' ');
  return text;
}

constexpr int kLeft = 52, kRight = kNoteWidth * kInkScale - 52;
constexpr int kDot = 4;
constexpr int kLine = 11 * kDot;

void goods(Sheet& sheet, int top, int rows, Draws& draws) {
  struct Item {
    const char* unit;
    const char* goods;
  };
  const Item items[] = {
      {"CRATES", "GREY SAND"},  {"SACKS", "BENTONITE"},    {"DRUMS", "CORE BINDER"},
      {"CRATES", "PIG IRON"},   {"BOXES", "CHILL PLATES"}, {"BAGS", "COAL DUST"},
      {"REELS", "FILTER MESH"}, {"BAGS", "FIRE CLAY"},     {"SACKS", "LIME STONE"},
      {"DRUMS", "STEEL SHOT"},  {"BOXES", "WAX SHEETS"},   {"CRATES", "LADLE BRICK"}};
  sheet.text(kLeft + 8, top, padded("QTY", 5) + padded("UNIT", 8) + padded("GOODS", 13) + "KG",
             kDot, 1);
  for (int row = 0; row < rows; ++row) {
    // One draw a statement: the order of arguments and operands is the compiler's choice.
    std::string line = padded(format("%3d", 1 + draws.below(48)), 5);
    const Item& item = items[draws.below(12)];
    line += padded(item.unit, 8) + padded(item.goods, 13);
    line += format("%4d", 10 * (2 + draws.below(140)));
    sheet.text(kLeft + 8, top + (row + 1) * kLine + 10, line, kDot, 1);
  }
  const int bottom = top + (rows + 1) * kLine + 6;
  sheet.frame(kLeft, top - 16, kRight, bottom, 3, 0.9);
  sheet.box(kLeft, top + kLine - 10, kRight, top + kLine - 7, 0.9);
}

}  // namespace

Volume<float> note_ink(int number, Draws& draws) {
  Sheet sheet(draws);
  sheet.text(kLeft, 56, "DELIVERY NOTE", 2 * kDot - 2, 1);
  sheet.text(kRight - 200, 66, format("NO %d", number), kDot, 1);
  sheet.box(kLeft, 112, kRight, 117, 0.9);
  const int lorry = 1 + draws.below(6), store = 1 + draws.below(9), shelf = 10 + draws.below(80);
  const int yard = 1 + draws.below(4), gate = 1 + draws.below(7);
  sheet.text(kLeft, 144, format("DAY %03d       LORRY %d", 40 + 3 * (number % 97), lorry), kDot, 1);
  sheet.text(kLeft, 144 + kLine, format("FROM: STORE %d SHELF %d", store, shelf), kDot, 1);
  sheet.text(kLeft, 144 + 2 * kLine, format("TO: FOUNDRY YARD %d GATE %d", yard, gate), kDot, 1);
  const int rows = 5 + draws.below(5);
  goods(sheet, 310, rows, draws);

  int y = 310 + (rows + 2) * kLine;
  const char* const remarks[] = {"KEEP DRY.", "STACK NO MORE THAN 3 HIGH.", "RETURN EMPTY PALLETS.",
                                 "WEIGHED WITH PACKING.", "TWO BOXES DENTED."};
  sheet.text(kLeft, y, remarks[draws.below(5)], kDot, 1);
  y += kLine + 12;
  sheet.frame(kLeft, y - 4, kLeft + 32, y + 28, 3, 0.9);
  if (draws.below(4) != 0) sheet.text(kLeft + 7, y + 1, "X", 4, 1);
  sheet.text(kLeft + 52, y, "RECEIVED IN GOOD ORDER", kDot, 1);
  y = 1080;
  sheet.box(kLeft, y + 36, kLeft + 330, y + 39, 0.9);
  sheet.text(kLeft, y + 50, "SIGNED", kDot - 1, 1);
  sheet.scribble(kLeft + 40, y - 34, 240, 70);
  if (draws.below(3) != 0) {
    const int x = kRight - 250 + draws.below(30);
    sheet.frame(x, y - 20, x + 212, y + 48, 5, 0.72);
    sheet.text(x + 22, y, "CHECKED", kDot, 0.74);
  }
  return sheet.take();
}

}  // namespace stillfield::generate
