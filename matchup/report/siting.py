"""What the site allows, in sentences."""

from __future__ import annotations

from matchup.model.job import Job
from matchup.model.site import Site
from matchup.model.vibration import Vibration
from matchup.report.shown import Units


def site_lines(job: Job, units: Units) -> list[str]:
    """Return what hammers were held against before any blow; nothing without a site."""
    site = job.site
    if site is None:
        return []
    told = _rig(site, units)
    if site.standing is not None:
        told.append(
            f"buckling load of the free-standing pile at least {site.standing.safety:g} times what "
            f"stands on it (Euler, with own weight; fixed at "
            f"{units.text(site.standing.fixity, 'length')} below ground)"
        )
    if site.vibration is not None:
        told.append(_vibration(site.vibration, units))
    if not told:
        return []
    return [f"Site: {'; '.join(told)}. Heavier rams and other cures are not held against the site."]


def _rig(site: Site, units: Units) -> list[str]:
    """Return what rig and crane allow."""
    told = []
    if site.capacity is not None:
        told.append(f"hammer with helmet at most {units.text(site.capacity, 'mass')}")
    if site.capacity_with_pile is not None:
        told.append(f"with the pile at most {units.text(site.capacity_with_pile, 'mass')}")
    if site.headroom is not None:
        told.append(f"headroom {units.text(site.headroom, 'length')}")
    if site.blow_rate_max is not None:
        told.append(f"at most {60 * site.blow_rate_max:g} blows/min")
    return told


def _vibration(vibration: Vibration, units: Units) -> str:
    """Return the limit of vibration and the relation, with how each is known."""
    by_soil = "given in the job" if vibration.soil is None else f"{vibration.soil} ground"
    return (
        f"vibration at {units.text(vibration.distance, 'length')} at most "
        f"{units.text(vibration.limit, 'vibration')}, as given; {vibration.published.text}; factor "
        f"{vibration.used_factor:g} ({by_soil}); measured values scatter widely"
    )
