#include "oracle/judge/waiting_reference.hpp"

#include <algorithm>

namespace halflsb {

void WaitingReference::append(const ReferenceBlock& block) {
    const auto append = [](auto& waiting, auto fresh) { waiting.insert(waiting.end(), fresh.begin(), fresh.end()); };
    append(codes_, block.codes);
    append(stimulus_, block.stimulus);
    append(declared_, block.declared);
    append(design_, block.design);
    append(twin_, block.twin);
    append(exempt_, block.exempt);
}

void WaitingReference::append_silence(std::size_t count, const Signal& signal, WantedReferences wanted) {
    codes_.insert(codes_.end(), count, zero_code(signal.input));
    stimulus_.insert(stimulus_.end(), count, 0.0);
    declared_.insert(declared_.end(), count, 0.0);
    if (wanted.design) design_.insert(design_.end(), count, 0.0);
    if (wanted.twin) twin_.insert(twin_.end(), count, zero_code(signal.output));
    if (wanted.rails) exempt_.insert(exempt_.end(), count, std::uint8_t{0});
}

ReferenceBlock WaitingReference::first(std::size_t count) const {
    return ReferenceBlock{0, codes_, stimulus_, declared_, design_, twin_, exempt_}.first(count);
}

void WaitingReference::drop(std::size_t count) {
    const auto drop = [count](auto& waiting) {
        waiting.erase(waiting.begin(), waiting.begin() + static_cast<std::ptrdiff_t>(std::min(count, waiting.size())));
    };
    drop(codes_);
    drop(stimulus_);
    drop(declared_);
    drop(design_);
    drop(twin_);
    drop(exempt_);
}

}  // namespace halflsb
