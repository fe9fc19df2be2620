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

}  // namespace halflsb
