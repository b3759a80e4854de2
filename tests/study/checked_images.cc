#include "study/checked_images.h"

#include <algorithm>
#include <cmath>

#include "study/synthetic.h"

namespace stillfield::study {
namespace {

constexpr double kDarkest = 90, kContrast = 50;

// Correlated normal noise of unit variance: white noise convolved with a Gaussian of this width.
Volume<float> smooth_noise(int side, double width, RandomStream& random) {
  const int reach = static_cast<int>(std::ceil(4 * width));
  std::vector<double> kernel;
  double square = 0;
  for (int i = -reach; i <= reach; ++i) {
    kernel.push_back(std::exp(-0.5 * i * i / (width * width)));
    square += kernel.back() * kernel.back();
  }
  const int whole = side + 2 * reach;
  Volume<float> white({whole, whole}), rows({side, whole}), out({side, side});
  for (int y = 0; y < whole; ++y) {
    for (int x = 0; x < whole; ++x) white.at(x, y) = static_cast<float>(random.normal());
  }
  for (int y = 0; y < whole; ++y) {
    for (int x = 0; x < side; ++x) {
      double sum = 0;
      for (int i = 0; i <= 2 * reach; ++i) {
        sum += kernel[static_cast<std::size_t>(i)] * white.at(x + i, y);
      }
      rows.at(x, y) = static_cast<float>(sum);
    }
  }
  for (int y = 0; y < side; ++y) {
    for (int x = 0; x < side; ++x) {
      double sum = 0;
      for (int i = 0; i <= 2 * reach; ++i) {
        sum += kernel[static_cast<std::size_t>(i)] * rows.at(x, y + i);
      }
      out.at(x, y) = static_cast<float>(sum / square);
    }
  }
  return out;
}

Volume<std::uint8_t> blobs(int side, int classes, std::uint64_t seed) {
  RandomStream random(chain_key(seed, 7), Purpose::kSimulation);
  const Volume<float> field = smooth_noise(side, 5.0, random);
  Volume<std::uint8_t> labels({side, side});
  for (int y = 0; y < side; ++y) {
    for (int x = 0; x < side; ++x) {
      const float f = field.at(x, y);
      labels.at(x, y) =
          static_cast<std::uint8_t>(classes == 2 ? f > 0.3F : (f > -0.4F) + (f > 0.6F));
    }
  }
  return labels;
}

Volume<std::uint8_t> truth_of(const CheckedImage& image) {
  if (!image.disks) return blobs(image.side, image.true_classes, image.seed);
  TruthField first = draw_disks(image.side, image.seed);
  if (image.true_classes == 3) {
    const TruthField second = draw_disks(image.side, image.seed + 5000);
    for (int y = 0; y < image.side; ++y) {
      for (int x = 0; x < image.side; ++x) {
        if (second.labels.at(x, y) == 1) first.labels.at(x, y) = 2;
      }
    }
  }
  return std::move(first.labels);
}

std::vector<CheckedImage> with_varied_shapes(std::vector<CheckedImage> images,
                                             std::uint64_t first_seed) {
  constexpr int kSides[] = {96, 128, 192, 256};
  for (std::size_t i = 0; i < images.size(); ++i) {
    images[i].side = kSides[i % 4];
    images[i].disks = i / 4 % 2 == 0;
    images[i].eight_bits = i / 2 % 2 == 0;
    images[i].seed = first_seed + i;
  }
  return images;
}

}  // namespace

std::vector<CheckedImage> checked_images() {
  std::vector<CheckedImage> faulty, sound;
  const auto add = [&faulty](const char* fault, double size, int asked, int true_classes,
                             double sigma) {
    CheckedImage image;
    image.fault = fault;
    image.size_of_fault = size;
    image.asked_classes = asked;
    image.true_classes = true_classes;
    image.sigma = sigma;
    faulty.push_back(image);
  };
  constexpr double kSigmas[] = {0.3, 0.5, 0.8};
  for (const double width : {0.5, 0.7, 1.0, 1.5, 2.5}) {
    for (const double sigma : kSigmas) add("correlated noise", width, 2, 2, sigma);
  }
  for (const double shading : {0.2, 0.3, 0.4}) {
    for (const double sigma : {0.3, 0.4, 0.5, 0.8}) add("shading", shading, 2, 2, sigma);
  }
  for (int i = 0; i < 8; ++i) add("class too few", 1, 2, 3, i % 2 == 0 ? 0.3 : 0.5);
  for (int i = 0; i < 7; ++i) add("class too many", 1, 3, 2, kSigmas[i % 3]);
  // A bright class of which a quarter to three quarters are cut off.
  for (int i = 0; i < 8; ++i) add("saturated", 0.25 + 0.25 * (i % 3), 2, 2, kSigmas[i / 3]);
  constexpr double kSoundSigmas[] = {0.3, 0.4, 0.7, 1.0, 0.5};
  for (int i = 0; i < 50; ++i) {
    CheckedImage image;
    image.fault = "none";
    image.sigma = kSoundSigmas[i % 5];
    image.true_classes = image.asked_classes = i % 3 == 0 && image.sigma < 0.6 ? 3 : 2;
    sound.push_back(image);
  }
  faulty = with_varied_shapes(std::move(faulty), 100);
  sound = with_varied_shapes(std::move(sound), 900);
  faulty.insert(faulty.end(), sound.begin(), sound.end());
  return faulty;
}

Volume<float> draw(const CheckedImage& image) {
  const Volume<std::uint8_t> truth = truth_of(image);
  RandomStream random(chain_key(image.seed, 8), Purpose::kSimulation);
  const bool correlated = image.fault == "correlated noise";
  const Volume<float> noise =
      smooth_noise(image.side, correlated ? image.size_of_fault : 0.1, random);
  // Of N(0, 1), beyond which a quarter, half, three quarters lie (tables).
  const double cut =
      image.size_of_fault < 0.3 ? 0.6745 : (image.size_of_fault < 0.6 ? 0.0 : -0.6745);
  const double brightest = kDarkest + kContrast * (image.true_classes - 1);
  const double angle = 6.283 * random.uniform();
  Volume<float> out(truth.extent());
  for (int y = 0; y < image.side; ++y) {
    for (int x = 0; x < image.side; ++x) {
      double value = kDarkest + kContrast * truth.at(x, y);
      if (image.fault == "shading") {
        const double u = 2.0 * x / image.side - 1.0, v = 2.0 * y / image.side - 1.0;
        const double along = u * std::cos(angle) + v * std::sin(angle);
        value *= 1.0 + 0.5 * image.size_of_fault * along;  // from end to end size_of_fault
      }
      value += image.sigma * kContrast * noise.at(x, y);
      if (image.fault == "saturated") {
        value = std::min(value, brightest + cut * image.sigma * kContrast);
      }
      if (image.eight_bits) value = std::clamp(std::floor(value + 0.5), 0.0, 255.0);
      out.at(x, y) = static_cast<float>(value);
    }
  }
  return out;
}

}  // namespace stillfield::study
