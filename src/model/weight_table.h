// Likelihood and class field as tables over grey levels: what the kernels' weight planes hold.
//
// K > 2    weight_k(l) = e^{alpha_k} f_k(l) / max_j e^{alpha_j} f_j(l)
// K = 2    one table: the ratio of label 0 to label 1, clamped to [1e-30, 1e30]
// Missing  f_k = 1 for every class, at index grey.levels
#ifndef STILLFIELD_MODEL_WEIGHT_TABLE_H_
#define STILLFIELD_MODEL_WEIGHT_TABLE_H_

#include <vector>

#include "model/grey_levels.h"
#include "model/label_model.h"

namespace stillfield {

struct WeightTable {
  int planes = 0;            // 1 for two labels, K otherwise
  int levels = 0;            // entries a plane: grey levels and one for missing pixels
  std::vector<float> value;  // [plane * levels + level]
};

// Only levels that occur are filled in.
void fill_weight_table(const GreyLevels& grey, const LabelModel& model, WeightTable& table);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_WEIGHT_TABLE_H_
