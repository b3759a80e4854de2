// The recorded values of one scalar: n draws of each of m chains.
//
// Shape    n draws x m chains, stored chain after chain; chain(c) is contiguous
// Errors   Error(kUsage) if the chains differ in length, or if the number of values is not a
//          multiple of the number of chains
#ifndef STILLFIELD_DIAGNOSE_DRAWS_H_
#define STILLFIELD_DIAGNOSE_DRAWS_H_

#include <cstddef>
#include <span>
#include <vector>

namespace stillfield {

class Draws {
 public:
  Draws() = default;
  // All values zero, to be filled through chain().
  Draws(std::size_t draws, std::size_t chains);
  // values holds all draws of chain 0, then those of chain 1, and so on.
  Draws(std::vector<double> values, std::size_t chains);
  explicit Draws(const std::vector<std::vector<double>>& chains);

  std::size_t draws() const { return draws_; }
  std::size_t chains() const { return chains_; }
  std::size_t size() const { return values_.size(); }
  std::span<double> chain(std::size_t c) { return {values_.data() + c * draws_, draws_}; }
  std::span<const double> chain(std::size_t c) const {
    return {values_.data() + c * draws_, draws_};
  }
  std::span<const double> values() const { return values_; }
  std::span<double> values() { return values_; }

 private:
  std::size_t draws_ = 0;
  std::size_t chains_ = 0;
  std::vector<double> values_;
};

// Fewer draws a chain than this say nothing about convergence: the diagnostics return NaN.
inline constexpr std::size_t kMinDraws = 4;

// At least one chain, kMinDraws draws each, and every value finite.
bool can_be_diagnosed(const Draws& draws);

// Every value equals every other (also true of an empty set).
bool is_constant(const Draws& draws);

// Each chain cut into its first and second half: n/2 x 2m. The middle draw of an odd n is dropped.
Draws split_chains(const Draws& draws);

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_DRAWS_H_
