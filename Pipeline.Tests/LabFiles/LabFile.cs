using System.Text.Json;
using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Comparison;
using Pipeline.Fitting;
using Pipeline.Ingest;
using Pipeline.Quantities;
using Pipeline.Reduction;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.LabFiles;

/// <summary>A folder of lab files with known truth, and what the lab's notes say of it.</summary>
sealed class LabFile
{
    readonly JsonElement _setup;

    public LabFile(string folder)
    {
        Skip.If(Repository.Shared is null, "the lab files with known truth are not on this machine");
        Folder = Path.Combine(Repository.Shared!, "lab-files", folder);
        JsonElement root = JsonDocument.Parse(File.ReadAllBytes(Path.Combine(Folder, "truth.json"))).RootElement;
        (_setup, Truth) = (root.GetProperty("setup"), root.GetProperty("truth").GetProperty("conditions"));
    }

    public string Folder { get; }
    public JsonElement Truth { get; }

    bool Analog => _setup.GetProperty("detector").GetProperty("mode").GetString() == "analog";

    double Number(string key) => _setup.GetProperty(key).GetDouble();
    double Sigma(string key) => _setup.GetProperty("sigma").GetProperty(key).GetDouble();
    Measured Relative(string key, string sigma) => new(Number(key), Number(key) * Sigma(sigma));

    /// <summary>The apparatus as the lab knows it; the probe of an arrival run stands at right angles.</summary>
    public Setup Setup(FlightKind on = FlightKind.NotUnique)
    {
        JsonElement emission = _setup.GetProperty("emission"), detector = _setup.GetProperty("detector");
        double transverse = Number("transverse_sigma_m_per_s") / Number("wavelength_m");
        return new Setup
        {
            Species = new Species
            {
                Name = "invented", Mass = new(Number("mass_kg")), Wavelength = new(Number("wavelength_m")),
                NaturalLinewidth = new(Number("natural_linewidth_hz")), GroundLevels = (int)Number("n_ground"), ExcitedLevels = (int)Number("n_excited"),
            },
            Beamline = new Beamline
            {
                SourceToProbe = Relative("source_to_probe_m", "source_to_probe_rel"),
                AcceptanceHalfWidthX = Number("acceptance_half_width_x_m"), AcceptanceHalfWidthY = Number("acceptance_half_width_y_m"),
            },
            Probe = new Probe
            {
                Width = Relative("probe_width_m", "probe_width_rel"), Saturation = Relative("saturation", "saturation_rel"),
                Angle = new(Math.PI / 2, Sigma("probe_angle_deg") * Math.PI / 180),
                DetuningSpread = new(Math.Sqrt(Math.Pow(Number("laser_jitter_hz"), 2) + Math.Pow(Number("shot_jitter_hz"), 2) + transverse * transverse)),
            },
            Detector = new Detector
            {
                Kind = Analog ? DetectorKind.Analog : DetectorKind.Counting, Efficiency = Relative("detection_efficiency", "detection_efficiency_rel"),
                DeadTime = Analog ? default : new(detector.GetProperty("dead_time_s").GetDouble()),
                VoltSecondPerElectron = Analog ? new(detector.GetProperty("volt_second_per_photon").GetDouble()) : null,
                ExcessNoise = Analog ? new(detector.GetProperty("excess_noise").GetDouble()) : new(1),
                TimeConstant = Analog ? new(detector.GetProperty("rc_s").GetDouble()) : default, ProbeMonitorZero = new(0.02), AblationMonitorZero = new(0.05),
                ProbeMonitorNoise = 0.005, AblationMonitorNoise = 0.08,
            },
            Emission = new ExponentialGaussianEmission
            {
                Delay = new(emission.GetProperty("centre_s").GetDouble()), Width = new(emission.GetProperty("gauss_sigma_s").GetDouble()),
                Tail = new(emission.GetProperty("exp_tau_s").GetDouble()),
            },
            Conditions = new Dictionary<string, FlightKind>(StringComparer.Ordinal) { ["off"] = FlightKind.Free, ["on"] = on },
            CaptureSpeed = Number("capture_velocity_m_per_s"),
        };
    }

    /// <summary>The apparatus of a scan at the angle of the lab notes, with lines and jitter; the zero of the axis as another run told it.</summary>
    public Setup ScanSetup(Measured zero, bool across = false)
    {
        Setup setup = Setup();
        double angle = across ? Math.PI / 2 : Number("probe_angle_deg") * Math.PI / 180, transverse = Number("transverse_sigma_m_per_s") * Math.Sin(angle) / Number("wavelength_m");
        double jitter = Math.Sqrt(Math.Pow(Number("laser_jitter_hz"), 2) + Math.Pow(Number("shot_jitter_hz"), 2));
        double[] offsets = [.. _setup.GetProperty("hyperfine_offsets_hz").EnumerateArray().Select(o => o.GetDouble())], weights = [.. _setup.GetProperty("hyperfine_weights").EnumerateArray().Select(o => o.GetDouble())];
        return setup with
        {
            Species = setup.Species with { Lines = [.. offsets.Zip(weights, (o, w) => new SpectralLine(o, w))] },
            Probe = setup.Probe with { Angle = new(angle, Sigma("probe_angle_deg") * Math.PI / 180), DetuningSpread = new(Math.Sqrt(jitter * jitter + transverse * transverse)), LaserJitter = new(jitter), AxisZero = zero },
        };
    }

    public static AnalysisSettings Settings(string background = "steady", string estimator = "unfolded") => new()
    {
        Reduction = new ReductionSettings { ShotsPerBlock = 5, UnlockedBeyondHz = 100e6 },
        Background = background,
        Fit = new FitSettings { FromSeconds = 0.8e-3, VelocityFrom = 5, VelocityTo = 301, VelocityStep = 3, Estimator = estimator },
        Comparison = new ComparisonSettings(),
    };

    static readonly ShotColumns HdfColumns = new()
    {
        Point = null,
        Number = "shots/shot", Kind = "shots/kind", Condition = "shots/decelerator", ProbeMonitor = "shots/probe_monitor_v",
        AblationMonitor = "shots/ablation_monitor_v", Detuning = "shots/detuning_readback_hz", KindLabels = ["signal", "no_ablation", "probe_blocked", "dark"],
    };

    public static ShotFileLayout Matrix { get; } = new Hdf5MatrixLayout
    {
        Name = "hdf5-matrix", Meaning = SampleMeaning.BinStart, Samples = "fluorescence", Start = new(null, "t_start_s"), Step = new(null, "dt_s"),
        Scale = new(null, "scale"), Offset = new(null, "offset"), Shots = HdfColumns,
    };

    public static ShotFileLayout Wide { get; } = new WideCsvLayout
    {
        Name = "csv-wide", Meaning = SampleMeaning.BinStart, TimeColumn = "time (us)", TimeFactor = 1e-6, ShotColumn = "shot_{number}",
        ShotTable = "{run}_shots.csv",
        Shots = new ShotColumns
        {
            Number = "shot", Kind = "kind", Condition = "decelerator", ProbeMonitor = "probe_monitor_v", AblationMonitor = "ablation_monitor_v",
            Detuning = "detuning_readback_hz", KindLabels = ["signal", "no_ablation", "probe_blocked", "dark"],
        },
    };

    public static MoleculeFileLayout Molecules { get; } = new()
    {
        Name = "molecules", Time = "t_s", Z = "z_m", Vz = "vz_m_per_s", X = "x_m", Y = "y_m", Vx = "vx_m_per_s", Vy = "vy_m_per_s", Weight = "weight",
    };

    public BinnedRun Reduce(string file, ShotFileLayout layout, AnalysisSettings settings)
    {
        using IShotSource source = ShotFiles.Open(Path.Combine(Folder, file), layout, Analog ? DetectorKind.Analog : DetectorKind.Counting);
        return Reducer.Reduce(source.Shape, source.Shots, source.ReadBlocks(), Setup().Detector, settings.Reduction);
    }
}
