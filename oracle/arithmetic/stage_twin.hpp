// One stage of a twin, or one section of a cascade. twin.cpp puts them in a row; private to this room.
//
// What passes from one to the next is a number of the words between them, or the bits of a float32.
#pragma once

#include <algorithm>
#include <cstdint>
#include <memory>
#include <span>
#include <string>
#include <vector>

#include "oracle/arithmetic/accumulator.hpp"
#include "oracle/arithmetic/described.hpp"
#include "oracle/arithmetic/twin.hpp"

namespace halflsb {

class StageTwin {
public:
    virtual ~StageTwin() = default;
    virtual void reset() = 0;
    virtual std::size_t outputs_for(std::size_t inputs) const { return inputs; }
    /// out.size() == outputs_for(in.size()); where that is one for one the spans may be equal.
    virtual void process(std::span<const std::int64_t> in, std::span<std::int64_t> out) = 0;
    /// What Twin::state() is made of.
    virtual void append_state(std::vector<std::int64_t>& state) const = 0;
    /// Takes its share from the front of what append_state wrote; false where that is too little, or no state.
    virtual bool take_state(std::span<const std::int64_t>& state) = 0;
    virtual void append_reaches(std::vector<NodeReach>& reaches) const = 0;
};

/// What a section or an iir is computed from, as designed: b0 b1 ..., a1 a2 ...
struct Recurrence {
    std::vector<double> forward, feedback;
    bool is_one_pole = false;  ///< the firmware stores b0 alone
};

// Integer stages. `name` is put before the names of the nodes, "stage 1, ".
std::unique_ptr<StageTwin> make_fir_twin(const DescribedStage& stage, const std::string& name);
std::unique_ptr<StageTwin> make_comb_twin(const DescribedStage& stage, const std::string& name);
std::unique_ptr<StageTwin> make_moving_average_twin(const DescribedStage& stage, const std::string& name);
std::unique_ptr<StageTwin> make_one_pole_twin(const DescribedStage& stage, const std::string& name);
/// The section has the words stage.in and stage.out, as its neighbours in a cascade make them.
std::unique_ptr<StageTwin> make_direct_1_twin(const DescribedStage& stage, const Recurrence& section,
                                              const std::string& name);
std::unique_ptr<StageTwin> make_direct_2_twin(const DescribedStage& stage, const Recurrence& section,
                                              const std::string& name);
std::unique_ptr<StageTwin> make_transposed_2_twin(const DescribedStage& stage, const Recurrence& section,
                                                  const std::string& name);

/// Any float32 stage; of a section `section` says what it computes.
std::unique_ptr<StageTwin> make_float_twin(const DescribedStage& stage, const Recurrence* section,
                                           const std::string& name);

}  // namespace halflsb
