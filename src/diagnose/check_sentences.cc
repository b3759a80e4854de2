#include "diagnose/check_sentences.h"

#include <cmath>

#include "diagnose/number_text.h"

namespace stillfield {
namespace {

std::string class_text(int label) {
  return "class " + std::to_string(label);
}

std::string neighbours_text(int label) {
  return "classes " + std::to_string(label) + " and " + std::to_string(label + 1);
}

}  // namespace

std::string check_sentence(const ModelCheck& check) {
  const double excess = check.value - check.expected;
  if (check.name == "noise_level") {
    return "noise is stronger in some places than in others (its variance varies by " +
           percent_text(std::sqrt(excess)) +
           "): probabilities are too sure where it is strong, not sure enough where it is weak";
  }
  if (check.name == "noise_correlation") {
    return excess > 0 ? "noise is correlated between neighbours (" + fixed_text(excess, 2) +
                            "): intervals are too narrow"
                      : "noise of neighbours is opposed (" + fixed_text(excess, 2) +
                            "), as after sharpening: intervals do not hold";
  }
  if (check.name == "noise_distribution") {
    return "grey values of " + class_text(check.label) +
           " do not scatter as one normal distribution: perhaps one class too few, skewed noise, "
           "or values that are cut off";
  }
  if (check.name == "slow_trend") {
    return "brightness drifts across the image within classes (" + percent_text(excess) +
           " of the scatter): uneven light biases fractions and borders; --shading auto models it";
  }
  if (check.name == "border_mixing") {
    return "borders are blurred: pixels along them hold " + percent_text(excess) +
           " of the class beyond, which the model does not know; thin parts and small particles "
           "suffer most";
  }
  if (check.name == "stray_values") {
    return percent_text(check.value) +
           " of the pixels are far from every class (dust, hot pixels): they widen the classes";
  }
  if (check.name == "class_contrast") {
    return neighbours_text(check.label) + " overlap: their means differ by " +
           fixed_text(check.value, 2) + " noise deviations";
  }
  if (check.name == "class_persistence") {
    return class_text(check.label) + " does not stay in place from draw to draw (" +
           percent_text(check.value) + " of its pixels do): perhaps one class too many";
  }
  if (check.name == "class_share") {
    return class_text(check.label) + " holds " + percent_text(check.value) +
           " of the pixels: perhaps one class too many";
  }
  if (check.name == "saturation") {
    return percent_text(check.value) + " of " + class_text(check.label) +
           " lie at the end of the grey scale: values are cut off, and its mean and scatter are "
           "wrong";
  }
  if (check.name == "uncertain_pixels") {
    return percent_text(check.value) + " of the pixels are uncertain: no class has probability 0.9";
  }
  if (check.name == "missing_pixels") {
    return percent_text(check.value) +
           " of the pixels are missing: their labels come from the neighbours alone";
  }
  return {};
}

}  // namespace stillfield
