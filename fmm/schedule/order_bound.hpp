#pragma once
// The highest order that the expansions of one evaluation keep.
#include "fmm/expansion/order_choice.hpp"
#include "fmm/schedule/box_accuracy.hpp"

namespace farsum {

struct OrderSurvey {
  int order = kMinOrder;  ///< kept by every expansion
  double pairs = 0;       ///< translations between boxes of one level
  double mean_order = 0;  ///< of those
};

/// The smallest order with which the few translations that would want a higher one add little to either norm of the contract.
OrderSurvey order_bound(const EvaluationJob& job, const NearLists& near, const DirectRule& rule, const BoxAccuracy& accuracy,
                        const OrderChoice& orders);

}  // namespace farsum
