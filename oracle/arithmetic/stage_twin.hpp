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

/// Which samples of its input a decimator computes: `first`, counted from 0, and each `each`-th after it.
struct Kept {
    std::size_t each = 1, first = 0;
};

// `name` is put before the names of the nodes, "stage 1, ". Of integer stages, but for the median:

std::unique_ptr<StageTwin> make_fir_twin(const DescribedStage& stage, const std::vector<double>& taps, Kept kept,
                                         const std::string& name);
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

std::unique_ptr<StageTwin> make_cic_twin(const DescribedStage& stage, const std::string& name);
/// In either kind of number.
std::unique_ptr<StageTwin> make_median_twin(const DescribedStage& stage, const std::string& name);

// Of float32 stages.
std::unique_ptr<StageTwin> make_float_fir_twin(const DescribedStage& stage, const std::vector<double>& taps, Kept kept,
                                               const std::string& name);
std::unique_ptr<StageTwin> make_float_comb_twin(const DescribedStage& stage, const std::string& name);
std::unique_ptr<StageTwin> make_float_average_twin(const DescribedStage& stage, const std::string& name);
/// Its coefficients as stored: multiples of 2^-f where the stage says f.
std::unique_ptr<StageTwin> make_float_section_twin(const DescribedStage& stage, const Recurrence& section,
                                                   const std::string& name);

}  // namespace halflsb
