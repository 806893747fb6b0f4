#include "io/openpmd/known_records.hpp"

namespace farsum::io::openpmd {
namespace {

constexpr MacroRule kPlain{false, 0, false}, kOfOne{false, 1, false}, kOfAll{true, 1, false};

constexpr KnownRecord kRecords[] = {
    {"position", dimension::kLength, kPlain, true},
    {"positionOffset", dimension::kLength, kPlain, true},
    {"momentum", dimension::kMomentum, kOfOne, true},
    {"momentumOffset", dimension::kMomentum, kOfOne, true},
    {"velocity", dimension::kVelocity, kPlain, true},
    {"charge", dimension::kCharge, kOfOne, false},
    {"mass", dimension::kMass, kOfOne, false},
    {"weighting", dimension::kNone, kOfAll, false},
    {"id", dimension::kNone, kPlain, false},
    {"potential", dimension::kPotential, kPlain, false},
    {"electricField", dimension::kField, kPlain, true},
    {"force", dimension::kForce, kOfAll, true},
    {"potentialEnergy", dimension::kEnergy, kOfAll, false},
};

}  // namespace

const KnownRecord* find_known_record(std::string_view name) noexcept {
  for (const KnownRecord& record : kRecords)
    if (record.name == name) return &record;
  return nullptr;
}

}  // namespace farsum::io::openpmd
