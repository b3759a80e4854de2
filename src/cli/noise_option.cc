#include "cli/noise_option.h"

#include <cmath>
#include <vector>

#include "cli/number_option.h"

namespace stillfield {
namespace {

// The numbers of "1,2.5,3"; none if one of them is no finite number.
std::optional<std::vector<double>> parse_list(const std::string& text) {
  std::vector<double> numbers;
  std::size_t from = 0;
  while (true) {
    const std::size_t comma = text.find(',', from);
    const auto number = parse_number(text.substr(from, comma - from));
    if (!number || !std::isfinite(*number)) return std::nullopt;
    numbers.push_back(*number);
    if (comma == std::string::npos) return numbers;
    from = comma + 1;
  }
}

std::optional<NoiseKind> parse_kind(const std::string& text) {
  for (const NoiseKind kind : {NoiseKind::kGaussian, NoiseKind::kPhoton, NoiseKind::kRician}) {
    if (text == name_of(kind)) return kind;
  }
  return std::nullopt;
}

}  // namespace

std::optional<NoiseRequest> parse_noise(const std::string& text) {
  NoiseRequest request;
  if (text == "auto") return request;
  const std::size_t colon = text.find(':');
  request.kind = parse_kind(text.substr(0, colon));
  if (!request.kind) return std::nullopt;
  if (colon == std::string::npos) return request;
  const auto numbers = parse_list(text.substr(colon + 1));
  if (!numbers) return std::nullopt;
  if (*request.kind == NoiseKind::kPhoton) {
    if (numbers->size() < 2 || numbers->size() > 3) return std::nullopt;
    request.photon = {(*numbers)[0], (*numbers)[1], numbers->size() == 3 ? (*numbers)[2] : 0.0};
  } else {
    if (numbers->size() != 1) return std::nullopt;
    request.sd = numbers->front();
  }
  return request;
}

std::string check_noise(const std::string& text) {
  const auto request = parse_noise(text);
  if (!request) {
    return "must be auto, gaussian, gaussian:SD, photon, photon:GAIN,VARIANCE[,OFFSET], rician or "
           "rician:SD, not '" +
           text + "'";
  }
  if (request->sd && *request->sd <= 0) {
    return "needs a standard deviation above 0, not '" + text +
           "'; without a number it is estimated";
  }
  if (request->photon && (request->photon->gain <= 0 || request->photon->variance < 0)) {
    return "needs a gain above 0 and a variance of at least 0, not '" + text +
           "'; without numbers they are estimated";
  }
  return {};
}

std::string check_impulses(const std::string& text) {
  if (text == "auto" || text == "off") return {};
  const auto share = parse_number(text);
  if (share && *share > 0 && *share < 0.5) return {};
  return "must be auto, off or a share above 0 and below 0.5, not '" + text + "'";
}

}  // namespace stillfield
