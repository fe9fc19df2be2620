#include "runner/wire/wire.hpp"

namespace halflsb {

std::string_view name_of(Injection injection) {
    switch (injection) {
        case Injection::call:
            return "call";
        case Injection::buffer:
            return "buffer";
        case Injection::converter:
            return "converter";
    }
    return "unknown";
}

WireInstant instant_of(const BoardFilter& filter) {
    const auto width = [](const SampleFormat& format, int channels) {
        return format.word_bytes() * static_cast<std::size_t>(channels);
    };
    return {width(filter.input, filter.channels_in), width(filter.output, filter.channels_out), filter.up, filter.down};
}

}  // namespace halflsb
