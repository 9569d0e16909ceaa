using System.Numerics;
using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra;

namespace GainMargin;

/// <summary>Turns located onsets into drafts with modes, slope, backward error and energy balance in the units of the model.</summary>
internal sealed class OnsetEvidence(SweepModel sweep)
{
    private readonly DofNames _dofs = sweep.Path.Nominal.Structure.Dofs;

    public OnsetDraft OfFlutter(FlutterCrossing crossing)
    {
        double omega = crossing.Omega * sweep.Model.Rate;
        var physical = sweep.Model.EvenToPhysical(crossing.Right);
        var mode = NamedVector.Scaled(_dofs, physical);
        return new OnsetDraft(
            crossing.Gain, crossing.Uncertainty, OnsetKind.Flutter, Frequency.Of(omega), crossing.Touches ? 0 : crossing.Slope.Real * sweep.Model.Rate,
            ModeMeasures.BackwardError(sweep.Model.Even.At(sweep.GainsAt(crossing.Gain)), new Complex(0, crossing.Omega), crossing.Right),
            mode, Mode(crossing.Left), sweep.Decay == 0 ? EnergyBalance.Of(sweep.Path.At(crossing.Gain), omega, [.. mode.Values]) : null);
    }

    /// <summary>
    /// The zero root moves with <c>s′ = −wᵀT_g v / wᵀT_s v</c>; of a motion without stiffness the damping (or mass) takes the
    /// place of the stiffness and the mass that of the damping, as in the static matrix <c>T</c> itself.
    /// </summary>
    public OnsetDraft OfDivergence(SingularGain gain)
    {
        double[] gains = sweep.GainsAt(gain.Gain);
        var closed = sweep.Model.Even.At(gains);
        var change = sweep.Model.Even.SlopeAt(gains, sweep.SlopesAt(gain.Gain));
        var known = sweep.Permanent.OnLeft ? gain.Left : gain.Right;
        var (elastic, drifting, free) = Parts(known);
        var byRoot = Form(closed.Damping, elastic) + Form(closed.Mass, drifting);
        var byGain = Form(change.Stiffness, known) + Form(change.Damping, drifting) + Form(change.Mass, free);
        double rounding = BorderedSystem.Rounding(sweep.Model.Even.ModuliAt(gains), 1, gain.Left, gain.Right);
        double? slope = Complex.Abs(byRoot) <= rounding ? null : -(byGain / byRoot).Real * sweep.Model.Rate;
        var shape = sweep.Permanent.OnLeft ? gain.Right : IsThere(free) ? free : IsThere(drifting) ? drifting : gain.Right;
        return new OnsetDraft(
            gain.Gain, gain.Uncertainty, OnsetKind.Divergence, default, slope,
            ModeMeasures.BackwardError(closed, Complex.Zero, shape), Mode(shape), Mode(gain.Left), null);

        bool IsThere(Complex[] part) => Dense.Norm2(part) > 1e-8 * Dense.Norm2(gain.Right);

        // wᵀAv with one of the two vectors replaced by a part of itself.
        Complex Form(Matrix<double> a, Complex[] part)
        {
            var (w, v) = sweep.Permanent.OnLeft ? (part, gain.Right) : (gain.Left, part);
            var sum = Complex.Zero;
            for (int i = 0; i < w.Length; i++)
            {
                for (int j = 0; j < v.Length; j++)
                {
                    sum += w[i] * a[i, j] * v[j];
                }
            }

            return sum;
        }
    }

    public OnsetDraft OfInfinity(SingularGain gain)
    {
        var closed = sweep.Model.Even.At(sweep.GainsAt(gain.Gain));
        return new OnsetDraft(
            gain.Gain, gain.Uncertainty, OnsetKind.ThroughInfinity, Frequency.Unlimited, null,
            ModeMeasures.BackwardError(MassOnly(closed), Complex.One, gain.Right), Mode(gain.Right), Mode(gain.Left), null);
    }

    private static QuadraticPencil MassOnly(QuadraticPencil pencil) => new(pencil.Mass, pencil.Mass * 0, pencil.Mass * 0);

    /// <summary>Splits a vector into its elastic part and its parts along drifting and free rigid motion.</summary>
    private (Complex[] Elastic, Complex[] Drifting, Complex[] Free) Parts(Complex[] v)
    {
        var (ontoDrifting, ontoFree) = sweep.RigidProjections();
        var drifting = Dense.Times(ontoDrifting, v);
        var free = Dense.Times(ontoFree, v);
        return ([.. v.Select((x, i) => x - drifting[i] - free[i])], drifting, free);
    }

    private NamedVector Mode(Complex[] even) => NamedVector.Scaled(_dofs, sweep.Model.EvenToPhysical(even));
}
