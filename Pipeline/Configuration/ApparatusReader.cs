using Pipeline.Apparatus;
using Pipeline.Quantities;

namespace Pipeline.Configuration;

/// <summary>apparatus.toml to <see cref="Setup"/>.</summary>
static class ApparatusReader
{
    /// <param name="root">The file.</param>
    /// <param name="species">Reads species/NAME.toml.</param>
    /// <param name="file">Path of the file that a key of a table names.</param>
    /// <returns>The setup with its usual detector, and other detectors and probes by name.</returns>
    public static (Setup Setup, IReadOnlyDictionary<string, Detector> Detectors, IReadOnlyDictionary<string, Probe> Probes) Read(
        TomlTable root, Func<TomlTable, string, Species> species, Func<TomlTable, string, string> file)
    {
        Species molecule = species(root, root.Text("species"));
        Decelerator? decelerator = root.OptionalTable("decelerator") is { } section ? ReadDecelerator(section) : null;
        Beamline beamline = ReadBeamline(root.Table("beamline"), decelerator);
        Probe probe = ReadProbe(root.Table("probe"), molecule);
        Detector detector = ReadDetector(root.Table("detector"));
        var others = new Dictionary<string, Detector>(StringComparer.Ordinal);
        if (root.OptionalTable("detectors") is { } named) foreach (string name in named.Keys.ToArray()) others[name] = ReadDetector(named.Table(name));
        var probes = new Dictionary<string, Probe>(StringComparer.Ordinal);
        if (root.OptionalTable("probes") is { } lasers) foreach (string name in lasers.Keys.ToArray()) probes[name] = ReadOtherProbe(lasers.Table(name), molecule);
        (EmissionProfile emission, Measured? levelShare) = EmissionReader.Read(root.Table("emission"), file);
        var conditions = ReadConditions(root.Table("conditions"), decelerator);
        TomlTable trap = root.Table("trap");
        double capture = trap.Quantity("capture_velocity", Dimension.Speed).Value;
        trap.RefuseUnknown();
        root.RefuseUnknown();
        return (trap.Build(() => new Setup
        {
            Species = molecule, Beamline = beamline, Probe = probe, Detector = detector, Emission = emission, LevelShare = levelShare, Conditions = conditions, CaptureSpeed = capture,
        }, new Dictionary<string, string>(StringComparer.Ordinal) { ["CaptureSpeed"] = "capture_velocity" }), others, probes);
    }

    static Beamline ReadBeamline(TomlTable t, Decelerator? decelerator)
    {
        Measured distance = t.Quantity("source_to_probe", Dimension.Length);
        Measured offset = t.OptionalQuantity("trigger_offset", Dimension.Time) ?? default;
        double? x = t.OptionalQuantity("acceptance_half_width_x", Dimension.Length)?.Value, y = t.OptionalQuantity("acceptance_half_width_y", Dimension.Length)?.Value;
        t.RefuseUnknown();
        if (decelerator is not null && decelerator.SourceToEntrance.Value + decelerator.Length.Value > distance.Value)
            throw t.Refuse("source_to_probe", distance.ToString() + " m", $"at least the end of the decelerator, {decelerator.SourceToEntrance.Value + decelerator.Length.Value:G6} m");
        return t.Build(() => new Beamline
        {
            SourceToProbe = distance, TriggerOffset = offset, AcceptanceHalfWidthX = x, AcceptanceHalfWidthY = y, Decelerator = decelerator,
        });
    }

    static Decelerator ReadDecelerator(TomlTable t)
    {
        var (entrance, length) = (t.Quantity("source_to_entrance", Dimension.Length), t.Quantity("length", Dimension.Length));
        int stages = t.Whole("stages", 1, 100_000);
        Measured energy = t.Quantity("energy_per_stage", Dimension.Energy);
        Measured? field = t.OptionalQuantity("peak_field", Dimension.MagneticField);
        t.RefuseUnknown();
        return t.Build(() => new Decelerator { SourceToEntrance = entrance, Length = length, Stages = stages, EnergyPerStage = energy, PeakField = field });
    }

    /// <summary>A probe beside the usual one may stand elsewhere on the beam line.</summary>
    static Probe ReadOtherProbe(TomlTable t, Species species)
    {
        Measured? distance = t.OptionalQuantity("source_to_probe", Dimension.Length);
        return t.Build(() => ReadProbe(t, species) with { SourceToProbe = distance });
    }

    static Probe ReadProbe(TomlTable t, Species species)
    {
        ProbeShape shape = t.Choice("shape", ("top-hat", ProbeShape.TopHat), ("gaussian", ProbeShape.Gaussian));
        var (width, angle) = (t.Quantity("width", Dimension.Length), t.Quantity("angle", Dimension.Angle));
        Measured? saturation = t.OptionalQuantity("saturation", Dimension.Fraction), rate = t.OptionalQuantity("scattering_rate", Dimension.Rate);
        if (saturation is null == rate is null)
            throw t.Refuse("saturation", saturation is null ? "neither saturation nor scattering_rate" : "both saturation and scattering_rate", "one of them", "state how bright the probe is, once");
        Measured detuning = t.OptionalQuantity("detuning", Dimension.Frequency) ?? default;
        Measured zero = t.OptionalQuantity("axis_zero", Dimension.Frequency) ?? default;
        Measured drift = t.OptionalQuantity("axis_drift", Dimension.Frequency) ?? default;
        Measured jitter = t.OptionalQuantity("laser_jitter", Dimension.Frequency) ?? default, transverse = t.OptionalQuantity("transverse_speed_spread", Dimension.Speed) ?? default;
        Measured field = t.OptionalQuantity("field", Dimension.MagneticField) ?? default;
        t.RefuseUnknown();
        if (field != default && species.Lines.All(l => l.FieldFactor is null))
            throw t.Refuse("field", $"a field, and no line of {species.Name} with g_m", "how lines move in it", "state g_m = ... under [[lines]] of the species (0 for a line that does not move), or g_m_spread = ... under its [hyperfine]");
        double project = Math.Abs(Math.Sin(angle.Value)) / species.Wavelength.Value, spread = double.Hypot(jitter.Value, transverse.Value * project);
        double sigma = spread == 0 ? 0 : double.Hypot(jitter.Value * jitter.Sigma, transverse.Value * transverse.Sigma * project * project) / spread;
        return t.Build(() => new Probe
        {
            Shape = shape, Width = width, Angle = angle, Saturation = saturation, ScatteringRate = rate, Detuning = detuning, DetuningSpread = new Measured(spread, sigma), LaserJitter = jitter, AxisZero = zero, AxisDrift = drift, Field = field,
        });
    }

    static Detector ReadDetector(TomlTable t)
    {
        DetectorKind kind = t.Choice("kind", ("counting", DetectorKind.Counting), ("analog", DetectorKind.Analog));
        (Measured efficiency, EfficiencyFactor[] factors) = EfficiencyReader.Read(t);
        Measured deadTime = kind == DetectorKind.Counting ? t.OptionalQuantity("dead_time", Dimension.Time) ?? default : default;
        DeadTimeKind paralysable = kind == DetectorKind.Counting && t.Has("dead_time_kind")
            ? t.Choice("dead_time_kind", ("non-paralysable", DeadTimeKind.NonParalysable), ("paralysable", DeadTimeKind.Paralysable)) : DeadTimeKind.NonParalysable;
        Measured? gain = kind == DetectorKind.Analog ? t.Quantity("volt_second_per_electron", Dimension.VoltSecond) : null;
        Measured filter = kind == DetectorKind.Analog ? t.Quantity("time_constant", Dimension.Time) : t.OptionalQuantity("time_constant", Dimension.Time) ?? default;
        Measured coupling = kind == DetectorKind.Analog ? t.OptionalQuantity("coupling_time", Dimension.Time) ?? default : default;
        Measured excess = kind == DetectorKind.Analog ? t.OptionalQuantity("excess_noise", Dimension.Fraction) ?? new Measured(1) : new Measured(1);
        if (excess.Value < 1) throw t.Refuse("excess_noise", $"{excess.Value:G4}", "1 or more: the mean square over the squared mean of the charge of one photo-electron");
        var (probeZero, ablationZero) = (t.OptionalQuantity("probe_monitor_zero", Dimension.Voltage) ?? default, t.OptionalQuantity("ablation_monitor_zero", Dimension.Voltage) ?? default);
        var (probeNoise, ablationNoise) = (t.OptionalQuantity("probe_monitor_noise", Dimension.Fraction) ?? default, t.OptionalQuantity("ablation_monitor_noise", Dimension.Fraction) ?? default);
        t.RefuseUnknown();
        return t.Build(() => new Detector
        {
            Kind = kind, Efficiency = efficiency, EfficiencyFactors = factors, DeadTime = deadTime, DeadTimeKind = paralysable, VoltSecondPerElectron = gain, TimeConstant = filter, CouplingTime = coupling, ExcessNoise = excess, ProbeMonitorZero = probeZero,
            AblationMonitorZero = ablationZero, ProbeMonitorNoise = probeNoise.Value, AblationMonitorNoise = ablationNoise.Value,
        });
    }

    static Dictionary<string, FlightKind> ReadConditions(TomlTable t, Decelerator? decelerator)
    {
        var conditions = new Dictionary<string, FlightKind>(StringComparer.Ordinal);
        foreach (string name in t.Keys.ToArray())
            conditions[name] = t.Choice(name, ("free", FlightKind.Free), ("decelerator", FlightKind.Decelerated), ("not-unique", FlightKind.NotUnique));
        if (conditions.Count == 0) throw t.Refuse("off", "no conditions", "at least one, such as off = \"free\"", "say how molecules fly in each condition");
        foreach ((string name, FlightKind kind) in conditions)
            if (kind == FlightKind.Decelerated && decelerator is null)
                throw t.Refuse(name, "\"decelerator\" without a [decelerator] table", "a described decelerator", "add [decelerator], or choose free or not-unique");
        return conditions;
    }
}
