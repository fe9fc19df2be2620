// Reference samples that wait for the response samples that meet them, when the response lags.
#pragma once

#include <vector>

#include "oracle/judge/reference_source.hpp"

namespace halflsb {

class WaitingReference {
public:
    void append(const ReferenceBlock& block);
    /// What the references say before their start: zeros.
    void append_silence(std::size_t count, const Signal& signal, WantedReferences wanted);
    std::size_t size() const { return codes_.size(); }
    /// Good until the next call; its first_index means nothing.
    ReferenceBlock first(std::size_t count) const;
    void drop(std::size_t count);

private:
    std::vector<Code> codes_, twin_;
    std::vector<std::uint8_t> exempt_;
    std::vector<double> stimulus_, declared_, design_;
};

}  // namespace halflsb
