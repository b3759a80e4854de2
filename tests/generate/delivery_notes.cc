// Old delivery notes on an office scanner: typed ink, uneven light, the reverse side showing
// through, dust, noise. Ink is class 1; dust and show-through belong to the paper, class 2.
#include <algorithm>
#include <cmath>
#include <vector>

#include "generate/note_layout.h"
#include "generate/picture.h"

namespace stillfield::generate {
namespace {

constexpr int kPages = 10;
constexpr double kPaper = 208;
constexpr double kInk = 62;
constexpr double kShowThrough = 10;
constexpr double kBlur = 0.55;
constexpr double kNoise = 9;

// Ink coverage of pixel (x, y) of a sheet laid down with a slight turn; 3 x 3 samples a pixel.
struct Coverage {
  double strength = 0;  // mean ink
  double share = 0;     // share of samples on ink
};

Coverage coverage(const Volume<float>& ink, double turn, int x, int y) {
  Coverage c;
  for (int j = 0; j < 3; ++j) {
    for (int i = 0; i < 3; ++i) {
      const double px = x + (2 * i + 1) / 6.0, py = y + (2 * j + 1) / 6.0;
      const double u = px - turn * (py - kNoteHeight / 2.0);
      const double v = py + turn * (px - kNoteWidth / 2.0);
      const int column = static_cast<int>(std::floor(u * kInkScale));
      const int row = static_cast<int>(std::floor(v * kInkScale));
      if (column < 0 || row < 0 || column >= ink.width() || row >= ink.height()) continue;
      const double strength = ink.at(column, row);
      c.strength += strength / 9;
      c.share += strength > 0 ? 1 / 9.0 : 0;
    }
  }
  return c;
}

struct Speck {
  double x, y, radius, dark;
};

double dust(const std::vector<Speck>& specks, int x, int y) {
  double dark = 0;
  for (const Speck& s : specks) {
    const double dx = x - s.x, dy = y - s.y;
    if (dx * dx + dy * dy < s.radius * s.radius) dark = std::max(dark, s.dark);
  }
  return dark;
}

struct Light {
  double across, down;
  SmoothField wave;
  double at(int x, int y) const {
    const double u = x / double{kNoteWidth}, v = y / double{kNoteHeight};
    return 1 - across * u - down * v * v + 0.015 * wave.at(x, y);
  }
};

void scan(const Volume<float>& front, const Volume<float>& back, Draws& draws,
          Volume<std::uint16_t>& page, Volume<std::uint8_t>& truth) {
  const double turn = draws.uniform(-0.008, 0.008), back_turn = draws.uniform(-0.008, 0.008);
  const Light light{draws.uniform(0.05, 0.13), draws.uniform(0.03, 0.08),
                    SmoothField(draws.bits(), 160)};
  std::vector<Speck> specks(static_cast<std::size_t>(14 + draws.below(20)));
  for (Speck& s : specks) {
    s = {draws.uniform(0, kNoteWidth), draws.uniform(0, kNoteHeight), draws.uniform(0.6, 1.6),
         draws.uniform(0.25, 0.6)};
  }

  const Extent extent{kNoteWidth, kNoteHeight};
  truth = Volume<std::uint8_t>(extent);
  Volume<float> clean(extent), through(extent);
  for (int y = 0; y < kNoteHeight; ++y) {
    for (int x = 0; x < kNoteWidth; ++x) {
      const Coverage ink = coverage(front, turn, x, y);
      truth.at(x, y) = ink.share >= 0.5 ? 1 : 2;
      const double dark = std::max(ink.strength, dust(specks, x, y));
      clean.at(x, y) = static_cast<float>(kPaper - (kPaper - kInk) * dark);
      through.at(x, y) = static_cast<float>(
          kShowThrough * coverage(back, back_turn, kNoteWidth - 1 - x, y).strength);
    }
  }
  blur(clean, kBlur);
  blur(through, 1.2);

  page = Volume<std::uint16_t>(extent);
  for (int y = 0; y < kNoteHeight; ++y) {
    for (int x = 0; x < kNoteWidth; ++x) {
      const double lit = (clean.at(x, y) - through.at(x, y)) * light.at(x, y);
      page.at(x, y) = quantised(lit + kNoise * draws.normal(), 8);
    }
  }
}

}  // namespace

Picture delivery_notes(std::uint64_t seed) {
  Draws draws(seed, 300);
  std::vector<Volume<float>> sheets;
  for (int i = 0; i <= kPages; ++i) sheets.push_back(note_ink(1042 + 7 * i, draws));

  Picture picture{"delivery-notes", "notes-box-12", 2, 8, {}, {}};
  picture.pages.resize(kPages);
  picture.truth.resize(kPages);
  for (int i = 0; i < kPages; ++i) {
    scan(sheets[i], sheets[i + 1], draws, picture.pages[i], picture.truth[i]);
  }
  return picture;
}

}  // namespace stillfield::generate
