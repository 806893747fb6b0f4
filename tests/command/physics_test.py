#!/usr/bin/env python3
"""The numbers in result files against independent sums in extended precision, in V, V/m, N and J."""
import unittest

import h5py
import numpy as np

from command_case import COULOMB, E_CHARGE, CommandCase, cloud, component, exact_sums, relative_rms, vector, write_file


class Physics(CommandCase):
    def results(self, name="result.h5", species="ions"):
        with h5py.File(self.path(name), "r") as file:
            group = file["data/0/particles/" + species]
            found = {"id": component(group["id"]), "places": vector(group["position"])}
            for record in ("potential", "potentialEnergy"):
                if record in group:
                    found[record] = group[record][:]
            for record in ("electricField", "force"):
                if record in group:
                    found[record] = vector(group[record])
            found["run"] = dict(file["run"].attrs)
            return found

    def test_potential_field_force_and_energy_of_macroparticles(self):
        places, charges = cloud(300)
        weights = np.linspace(1, 50, 300)
        write_file(self.path("in.h5"), {"0": {"ions": dict(places=places, charge=charges, weighting=weights)}})
        self.solve("in.h5", "result.h5", "--tolerance", "1e-12", "--json", "report.json")
        found = self.results()
        whole = charges * weights
        potential, field = exact_sums(places, places, whole)
        self.assertLess(relative_rms(found["potential"], potential), 1e-12)
        self.assertLess(relative_rms(found["electricField"], field), 1e-12)
        self.assertLess(relative_rms(found["force"], field * whole[:, None]), 1e-12)
        self.assertLess(relative_rms(found["potentialEnergy"], potential * whole / 2), 1e-12)
        energy = float((potential * whole).sum() / 2)
        report = self.report()
        self.assertLessEqual(abs(report["energy"]["value"] - energy), report["energy"]["error_bound"])
        self.assertAlmostEqual(report["energy"]["value"] / energy, 1, 10)
        self.assertAlmostEqual(found["run"]["totalEnergy"] / energy, 1, 10)
        self.assertAlmostEqual(report["total_charge"]["value"] / whole.sum(), 1, 12)

    def test_two_electrons_a_metre_apart(self):
        write_file(self.path("in.h5"), {"0": {"ions": dict(places=[[0, 0, 0], [1, 0, 0]], charge=-E_CHARGE)}})
        self.solve("in.h5")
        found = self.results()
        volt = -float(COULOMB) * E_CHARGE
        np.testing.assert_allclose(found["potential"], [volt, volt], rtol=1e-14)
        np.testing.assert_allclose(found["electricField"], [[-volt, 0, 0], [volt, 0, 0]], rtol=1e-14, atol=1e-30)
        np.testing.assert_allclose(found["force"][:, 0], [volt * E_CHARGE, -volt * E_CHARGE], rtol=1e-14)
        np.testing.assert_allclose(found["potentialEnergy"].sum(), -volt * E_CHARGE, rtol=1e-14)

    def test_permittivity_divides_everything_once(self):
        self.write_cloud()
        self.solve("in.h5", "vacuum.h5")
        self.solve("in.h5", "oil.h5", "--permittivity", 2.5)
        vacuum, oil = self.results("vacuum.h5"), self.results("oil.h5")
        for record in ("potential", "electricField", "force", "potentialEnergy"):
            np.testing.assert_allclose(oil[record] * 2.5, vacuum[record], rtol=1e-13)

    def test_rock_salt_cube_has_the_energy_of_the_finite_sum(self):
        # Simple cubic block of 10 x 10 x 10 alternating unit charges, spacing 1: U = -852.737912883928 (exact finite sum over
        # displacements, closed form of the block).
        self.run_farsum("generate", "crystallite", "grain.h5", "--count", 1000)
        self.solve("grain.h5", "result.h5", "--tolerance", "1e-9", "--json", "report.json")
        energy = self.report()["energy"]["value"]
        self.assertAlmostEqual(energy / (float(COULOMB) * E_CHARGE**2 / 2.8201e-10) / -852.737912883928, 1, 9)

    def test_only_chosen_outputs_are_written(self):
        self.write_cloud()
        for outputs, records in (("potential", {"potential"}), ("force", {"force"}), ("energy", {"potentialEnergy"}),
                                 ("field, potential", {"potential", "electricField"})):
            self.solve("in.h5", "result.h5", "--outputs", outputs, "--overwrite", "--json", "report.json")
            self.assertEqual(set(self.results()) - {"id", "places", "run"}, records)
            report = self.report()
            self.assertEqual(report["error"]["field_rms"] is not None, bool(records & {"electricField", "force"}))

    def test_lost_particles_are_left_out_and_order_and_ids_kept(self):
        places, charges = cloud(50)
        status = np.ones(50, dtype=int)
        status[[0, 7, 49]] = 2
        ids = np.random.default_rng(3).permutation(1000)[:50]
        write_file(self.path("in.h5"), {"0": {"ions": dict(places=places, charge=charges, ids=ids, status=status)}})
        done = self.solve("in.h5", "result.h5", "--tolerance", "1e-10")
        self.assertIn("3 lost", done.out)
        found, live = self.results(), status == 1
        np.testing.assert_array_equal(found["id"], ids[live])
        np.testing.assert_array_equal(found["places"], places[live])
        potential, _ = exact_sums(places[live], places[live], charges[live])
        self.assertLess(relative_rms(found["potential"], potential), 1e-10)

    def test_no_charge_one_charge_and_neutral_species(self):
        for count in (0, 1):
            places, charges = cloud(count)
            write_file(self.path("in.h5"), {"0": {"ions": dict(places=places, charge=charges)}})
            done = self.solve("in.h5", "result.h5", "--overwrite", "--json", "report.json")
            self.assertIn("exactly 0", done.out.splitlines()[0])
            self.assertEqual(self.report()["count"], count)
            self.assertTrue(np.all(self.results()["potential"] == 0))
        places, _ = cloud(5)
        write_file(self.path("in.h5"), {"0": {"ions": dict(places=places, charge=0.0)}})
        self.solve("in.h5", "result.h5", "--overwrite")
        self.assertTrue(np.all(self.results()["electricField"] == 0))


class Roles(CommandCase):
    """Species that act, species that are evaluated, and those that do both."""

    def setUp(self):
        super().setUp()
        self.species = {}
        for seed, name in enumerate("abc"):
            places, charges = cloud(40 + seed, seed + 10)
            self.species[name] = dict(places=places, charge=charges)
        write_file(self.path("in.h5"), {"0": self.species})

    def check(self, sources, targets, *arguments):
        self.solve("in.h5", "result.h5", "--tolerance", "1e-10", "--json", "report.json", "--overwrite", *arguments)
        places = np.concatenate([self.species[name]["places"] for name in sources])
        charges = np.concatenate([self.species[name]["charge"] for name in sources])
        with h5py.File(self.path("result.h5"), "r") as file:
            groups = file["data/0/particles"]
            self.assertEqual(set(groups), set(targets))
            for name in targets:
                potential, field = exact_sums(self.species[name]["places"], places, charges)
                self.assertLess(relative_rms(groups[name]["potential"][:], potential), 1e-10)
                self.assertLess(relative_rms(vector(groups[name]["electricField"]), field), 1e-10)
        self.assertEqual(self.report()["count"], sum(len(self.species[name]["places"]) for name in targets))
        self.run_farsum("verify", "in.h5", "result.h5")

    def test_all_act_on_all(self):
        self.check("abc", "abc")

    def test_species_limits_both(self):
        self.check("ac", "ac", "--species", "a,c")

    def test_disjoint(self):
        self.check("a", "b", "--sources", "a", "--targets", "b")

    def test_targets_among_sources_do_not_act_on_themselves(self):
        self.check("abc", "b", "--targets", "b")

    def test_sources_among_targets(self):
        self.check("b", "abc", "--sources", "b")

    def test_overlap(self):
        self.check("ac", "bc", "--sources", "a,c", "--targets", "b,c")

    def test_energy_is_left_out_when_roles_differ(self):
        self.solve("in.h5", "result.h5", "--sources", "a", "--json", "report.json")
        with h5py.File(self.path("result.h5"), "r") as file:
            self.assertNotIn("potentialEnergy", file["data/0/particles/b"])
        self.assertIsNone(self.report()["energy"]["value"])

    def test_unknown_species_lists_the_known(self):
        for option in ("--sources", "--targets", "--species"):
            done = self.solve("in.h5", "r.h5", option, "zeta", expect=1)
            self.assertIn("zeta", done.err)
            self.assertRegex(done.err, "a, b, c|'a', 'b', 'c'")


if __name__ == "__main__":
    unittest.main()
